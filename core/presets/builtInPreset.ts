import { z } from 'zod';
import { parseParameters } from '../parameters/parse.ts';
import type { Parameters } from '../parameters/table.ts';
import { describeFault } from './describeFault.ts';
import { presetNamePattern } from './presetName.ts';

/** A built-in preset as an author writes it: only the parameters that differ from the table's defaults. */
export const builtInPresetFileSchema = z
  .strictObject({
    $schema: z.string().optional(),
    format: z.literal('oxgall-built-in-preset'),
    schema: z.literal(1),
    title: z.string().min(1).max(60).meta({ description: 'The name as people read it.' }),
    summary: z.string().min(1).max(200).meta({ description: 'One plain sentence: what it is good for.' }),
    parameters: z
      .record(z.string(), z.union([z.string(), z.number()]))
      .meta({ description: 'Values that differ from the defaults, by parameter key.' }),
  })
  .meta({ title: 'Oxgall built-in preset' });

/** A preset that ships with the app: read-only, with one state. */
export interface BuiltInPreset {
  /** The file's base name, in kebab case: what the command line and recipes call it. */
  name: string;
  title: string;
  summary: string;
  /** A full set, checked against the table. */
  parameters: Parameters;
}

/**
 * Checks an authored preset and fills in the defaults.
 * @param name base name of the file it came from
 * @param authored the parsed file; not modified
 * @throws Error naming what was expected where, and what was received
 */
export function readBuiltInPreset(name: string, authored: unknown): BuiltInPreset {
  if (!presetNamePattern.test(name))
    throw new Error(`Expected a file name in kebab case, such as low-water.json, received ${name}`);
  const checked = builtInPresetFileSchema.safeParse(authored);
  if (!checked.success) throw new Error(describeFault(checked.error, authored));
  const { title, summary, parameters } = checked.data;
  return { name, title, summary, parameters: parseParameters(parameters) };
}
