import { z } from 'zod';
import { describeRange, parseParameter } from '../parameters/parse.ts';
import {
  defaultParameters,
  type Parameter,
  type ParameterKey,
  type Parameters,
  parameterKeys,
  parameterTable,
} from '../parameters/table.ts';

/**
 * Parameters as a file holds them: any of the table's keys, and keys of a later version, which are carried
 * along untouched.
 */
export type StoredParameters = Partial<Parameters> & Record<string, unknown>;

/**
 * Stored parameters, made from the parameter table. A key that is missing stands for the table's default, so
 * that a table which gains a key still reads every older file.
 */
export const storedParametersSchema = z
  .looseObject(Object.fromEntries(parameterKeys.map((key) => [key, valueSchema(key).optional()])))
  .meta({
    id: 'parameters',
    description: 'Parameter values by key. A missing key stands for its default.',
  }) as unknown as z.ZodType<StoredParameters>;

function valueSchema(key: ParameterKey): z.ZodType {
  const parameter: Parameter = parameterTable[key];
  const described = plainSchema(parameter).meta({
    description: `${parameter.label}: ${parameter.help} Takes ${describeRange(parameter)}.`,
    default: parameter.default,
  });
  return parameter.kind === 'length' ? described.refine(fits(key), { error: refusal(key) }) : described;
}

function plainSchema(parameter: Parameter): z.ZodType {
  switch (parameter.kind) {
    case 'number': {
      const number = z.number().min(parameter.min).max(parameter.max);
      return parameter.whole ? number.multipleOf(1) : number;
    }
    case 'autoNumber':
      return z.union([z.literal('auto'), z.number().min(parameter.min).max(parameter.max)]);
    case 'length':
      return z.string().regex(/^(?:\d+(?:\.\d+)?|\.\d+)(?:mm|px|permille)$/);
    case 'choice':
      return z.enum(parameter.choices.map((choice) => choice.value));
    case 'colour':
      return z.string().regex(/^#[0-9a-f]{6}$/);
  }
}

/** A length's bounds depend on its unit, which a pattern cannot say: the table's own check says it. */
function fits(key: ParameterKey): (value: unknown) => boolean {
  return (value) => {
    try {
      parseParameter(key, value);
      return true;
    } catch {
      return false;
    }
  };
}

function refusal(key: ParameterKey): (issue: { input?: unknown }) => string {
  return (issue) =>
    `Expected ${describeRange(parameterTable[key])} for ${key}, received ${JSON.stringify(issue.input)}`;
}

/**
 * The values to paint with: stored values over the table's defaults, keys unknown to this version left out.
 * @param stored checked stored parameters; not modified
 * @returns a full, fresh set
 */
export function fullParameters(stored: StoredParameters): Parameters {
  const known = parameterKeys.filter((key) => stored[key] !== undefined).map((key) => [key, stored[key]]);
  return { ...defaultParameters(), ...Object.fromEntries(known) };
}
