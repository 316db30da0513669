import { type ParameterKey, type Parameters, parameterKeys } from '../../core/parameters/table.ts';

/** Read by the composition alone: changing one needs no painting. */
const composedKeys: ReadonlySet<ParameterKey> = new Set<ParameterKey>([
  'ground.paper',
  'ground.colour',
  'body.strength',
  'line.strength',
  'line.blend',
  'line.colour',
  'relief.strength',
]);

/** Two looks with the same key have the same strata. */
export function strataKey(parameters: Parameters, printLongEdgeMm: number): string {
  return [
    printLongEdgeMm,
    // The surface is only lit where it is to be seen.
    parameters['relief.strength'] > 0,
    ...parameterKeys.filter((key) => !composedKeys.has(key)).map((key) => parameters[key]),
  ].join('|');
}
