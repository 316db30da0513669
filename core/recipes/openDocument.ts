import type { z } from 'zod';
import { describeFault } from '../presets/describeFault.ts';

/** Turns a document of one schema version into the next; takes and returns plain JSON, modifies nothing. */
export type Migration = (document: Record<string, unknown>) => Record<string, unknown>;

/**
 * A stored format with its whole past. A migration must leave states as they are: their ids are hashes of their
 * content.
 */
export interface DocumentFormat<Document> {
  /** The value of the field `format`. */
  format: string;
  /** What it is called in messages, such as `recipe`. */
  word: string;
  /** Newest schema version. */
  latest: number;
  schema: z.ZodType<Document>;
  /** Entry n leads from schema n + 1 to n + 2. */
  migrations: readonly Migration[];
}

/** What came of opening a stored text. */
export type Opened<Document> =
  | { kind: 'usable'; document: Document; migratedFrom: number | null }
  /** Written by a newer version: to be looked at, never to be saved. `document` where we understand enough. */
  | { kind: 'newer'; document: Document | null; schema: number; message: string }
  | { kind: 'damaged'; message: string };

/**
 * Reads a stored document, whatever its age. Fields of later versions are kept; numbers are doubles.
 * @param text JSON, with or without a byte order mark
 * @returns never throws: what is wrong is said in `message`
 */
export function openDocument<Document>(text: string, format: DocumentFormat<Document>): Opened<Document> {
  const parsed = parse(text, format.word);
  if ('message' in parsed) return { kind: 'damaged', message: parsed.message };
  const { fields } = parsed;
  if (fields.format !== format.format)
    return damaged(format, `Expected "${format.format}" for format, received ${show(fields.format)}`);
  const { schema } = fields;
  if (typeof schema !== 'number' || !Number.isInteger(schema) || schema < 1)
    return damaged(format, `Expected a whole number from 1 for schema, received ${show(schema)}`);
  if (schema > format.latest) return openNewer(fields, schema, format);
  let document = fields;
  for (let at = schema; at < format.latest; at++)
    document = { ...format.migrations[at - 1](document), schema: at + 1 };
  const checked = format.schema.safeParse(document);
  if (!checked.success) return damaged(format, describeFault(checked.error, document));
  // The document itself, not the schema's copy of it: nothing we do not know may be lost or reordered.
  const migratedFrom = schema < format.latest ? schema : null;
  return { kind: 'usable', document: document as Document, migratedFrom };
}

function openNewer<Document>(
  fields: Record<string, unknown>,
  schema: number,
  format: DocumentFormat<Document>,
): Opened<Document> {
  const isUnderstood = format.schema.safeParse({ ...fields, schema: format.latest }).success;
  const document = isUnderstood ? (fields as Document) : null;
  const message =
    `This ${format.word} was written by a newer Oxgall (schema ${schema}; this one knows ${format.latest}). ` +
    'It is open for looking only. Update Oxgall to go on with it.';
  return { kind: 'newer', document, schema, message };
}

function damaged<Document>(format: DocumentFormat<Document>, problem: string): Opened<Document> {
  return { kind: 'damaged', message: `This is no whole ${format.word}: ${problem}` };
}

function parse(text: string, word: string): { fields: Record<string, unknown> } | { message: string } {
  const bare = text.startsWith('\uFEFF') ? text.slice(1) : text;
  if (bare.trim() === '') return { message: `This ${word} is empty` };
  let value: unknown;
  try {
    value = JSON.parse(bare);
  } catch (fault) {
    const reason = fault instanceof Error ? fault.message : String(fault);
    return { message: `This is no whole ${word}: it cannot be read as JSON (${reason})` };
  }
  if (typeof value !== 'object' || value === null || Array.isArray(value))
    return { message: `This is no whole ${word}: Expected an object, received ${show(value)}` };
  const overflow = pathOfOverflow(value, []);
  if (overflow) return { message: `This ${word} holds a number too large to keep: ${overflow.join(' › ')}` };
  return { fields: value as Record<string, unknown> };
}

/** JSON.parse turns 1e999 into Infinity, which would be saved as null: better said than lost. */
function pathOfOverflow(value: unknown, path: string[]): string[] | null {
  if (typeof value === 'number') return Number.isFinite(value) ? null : path;
  if (typeof value !== 'object' || value === null) return null;
  for (const [key, field] of Object.entries(value)) {
    const found = pathOfOverflow(field, [...path, key]);
    if (found) return found;
  }
  return null;
}

function show(value: unknown): string {
  return value === undefined ? 'nothing' : (JSON.stringify(value) ?? String(value)).slice(0, 80);
}

/** The text a document is stored as: readable, two spaces, a line end at the end. */
export function documentText(document: unknown): string {
  return `${JSON.stringify(document, null, 2)}\n`;
}
