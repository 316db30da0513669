import { type ParameterKey, type Parameters, parameterKeys } from '../../core/parameters/table.ts';

/** Read by the composition alone: changing one needs no painting. */
const composedKeys: ReadonlySet<ParameterKey> = new Set<ParameterKey>([
  'ground.paper',
  'ground.colour',
  'body.strength',
  'line.strength',
  'line.blend',
  'line.colour',
]);

/** Two looks with the same key have the same strata. */
export function strataKey(parameters: Parameters, printLongEdgeMm: number): string {
  return [
    printLongEdgeMm,
    ...parameterKeys.filter((key) => !composedKeys.has(key)).map((key) => parameters[key]),
  ].join('|');
}
