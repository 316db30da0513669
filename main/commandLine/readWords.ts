import { type ParseArgsConfig, parseArgs } from 'node:util';
import { UsageError } from './usage.ts';

/**
 * Reads a command's words.
 * @param words as they were typed
 * @param options the command's options, in the form of `node:util`
 * @param range how many plain words are allowed, and what they are called in messages
 * @throws UsageError for an unknown option, a missing value, or the wrong number of plain words
 */
export function readWords<T extends NonNullable<ParseArgsConfig['options']>>(
  words: string[],
  options: T,
  range: { least: number; most: number; what: string },
) {
  let read: ReturnType<typeof parseArgs<{ options: T; allowPositionals: true; args: string[] }>>;
  try {
    read = parseArgs({ args: words, options, allowPositionals: true });
  } catch (cause) {
    throw new UsageError((cause as Error).message.split('. To specify')[0], { cause });
  }
  const count = read.positionals.length;
  if (count < range.least) throw new UsageError(`Expected ${range.what}, received none`);
  if (count > range.most)
    throw new UsageError(`Expected ${range.what}, received also ${read.positionals[range.most]}`);
  return read;
}

/** A whole number of an option. @throws UsageError */
export function readWhole(text: string, option: string, min: number, max: number): number {
  const number = /^\d+$/.test(text) ? Number(text) : Number.NaN;
  if (!(number >= min && number <= max))
    throw new UsageError(`Expected a whole number from ${min} to ${max} for ${option}, received ${text}`);
  return number;
}

/** A number of an option. @throws UsageError */
export function readNumber(text: string, option: string, min: number, max: number): number {
  const number = text.trim() === '' ? Number.NaN : Number(text);
  if (!(number >= min && number <= max))
    throw new UsageError(`Expected a number from ${min} to ${max} for ${option}, received ${text}`);
  return number;
}
