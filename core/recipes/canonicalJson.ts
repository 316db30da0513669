/** Depth at which a value is taken for one that contains itself. */
const deepest = 500;

/** A UTF-16 surrogate without its partner. */
const loneSurrogate = /[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/;

/**
 * The canonical text of a JSON value: keys in the order of their UTF-16 code units, no white space, numbers
 * and strings spelt as ECMAScript spells them. Equal values give equal text on every machine.
 * @param value null, booleans, finite numbers, texts, arrays and plain objects of these; not modified. Fields
 *   that are `undefined` count as absent.
 * @throws TypeError for what JSON cannot hold: numbers that are not finite, half a surrogate pair, functions,
 *   symbols, big integers, or nesting deeper than 500
 * Source: RFC 8785 (A. Rundgren, B. Jordan, S. Erdtman, 2020), section 3.2.
 */
export function canonicalJson(value: unknown): string {
  return write(value, 0);
}

function write(value: unknown, depth: number): string {
  if (depth > deepest) throw new TypeError(`Expected at most ${deepest} levels of nesting, received more`);
  if (value === null || typeof value === 'boolean') return String(value);
  if (typeof value === 'number') return writeNumber(value);
  if (typeof value === 'string') return writeText(value);
  if (Array.isArray(value)) return `[${value.map((entry) => write(entry, depth + 1)).join(',')}]`;
  if (typeof value === 'object') return writeObject(value as Record<string, unknown>, depth);
  throw new TypeError(`Expected a JSON value, received a ${typeof value}`);
}

function writeObject(value: Record<string, unknown>, depth: number): string {
  const fields: string[] = [];
  // The default order of sort() is that of UTF-16 code units, which is the one the RFC asks for.
  for (const key of Object.keys(value).sort()) {
    if (value[key] === undefined) continue;
    fields.push(`${writeText(key)}:${write(value[key], depth + 1)}`);
  }
  return `{${fields.join(',')}}`;
}

/** ECMAScript's own spelling is the RFC's; −0 becomes 0 by it. */
function writeNumber(value: number): string {
  if (!Number.isFinite(value)) throw new TypeError(`Expected a finite number, received ${value}`);
  return JSON.stringify(value);
}

function writeText(value: string): string {
  if (loneSurrogate.test(value))
    throw new TypeError(`Expected well-formed text, received ${JSON.stringify(value)}`);
  return JSON.stringify(value);
}
