import type { z } from 'zod';
import { describeRange, isParameterKey } from '../parameters/parse.ts';
import { parameterTable } from '../parameters/table.ts';

/**
 * The first fault of a checked value, in the one form of all our messages.
 * @param error what the schema found
 * @param received the whole value that was checked
 * @returns `Expected … for …, received …`
 */
export function describeFault(error: z.ZodError, received: unknown): string {
  const issue = error.issues[0];
  const value = valueAt(received, issue.path);
  const key = issue.path.at(-1);
  const isParameter = typeof key === 'string' && isParameterKey(key);
  const expected = isParameter ? describeRange(parameterTable[key]) : expectation(issue);
  const where = issue.path.length === 0 ? 'the file' : issue.path.map(String).join(' › ');
  return `Expected ${expected} for ${where}, received ${shorten(value)}`;
}

function expectation(issue: z.core.$ZodIssue): string {
  switch (issue.code) {
    case 'invalid_type':
      return article(issue.expected);
    case 'invalid_value':
      return issue.values.length === 1
        ? JSON.stringify(issue.values[0])
        : `one of ${issue.values.map((value) => JSON.stringify(value)).join(', ')}`;
    case 'too_small':
      return `${issue.inclusive === false ? 'more than' : 'at least'} ${sized(issue.minimum, issue.origin)}`;
    case 'too_big':
      return `${issue.inclusive === false ? 'less than' : 'at most'} ${sized(issue.maximum, issue.origin)}`;
    case 'unrecognized_keys':
      return `no ${issue.keys.join(', ')}`;
    case 'invalid_format':
      return issue.pattern ? `a text that fits ${issue.pattern}` : `a text of the form ${issue.format}`;
    case 'not_multiple_of':
      return `a multiple of ${issue.divisor}`;
    default:
      return issue.message;
  }
}

function article(type: string): string {
  const words: Record<string, string> = { string: 'a text', object: 'an object', array: 'a list' };
  return words[type] ?? (/^[aeiou]/.test(type) ? `an ${type}` : `a ${type}`);
}

function sized(bound: number | bigint, origin: string): string {
  if (origin === 'string') return `${bound} characters`;
  return origin === 'array' ? `${bound} entries` : String(bound);
}

function valueAt(value: unknown, path: readonly PropertyKey[]): unknown {
  let at: unknown = value;
  for (const step of path) {
    if (typeof at !== 'object' || at === null) return undefined;
    at = (at as Record<PropertyKey, unknown>)[step];
  }
  return at;
}

const longestShown = 80;

function shorten(value: unknown): string {
  if (value === undefined) return 'nothing';
  const text = JSON.stringify(value);
  return text.length > longestShown ? `${text.slice(0, longestShown)}…` : text;
}
