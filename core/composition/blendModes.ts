import type { Parameters } from '../parameters/table.ts';

/** Number of each blend mode in the composition kernel. */
export const blendModeNumber: Record<Parameters['line.blend'], number> = {
  normal: 0,
  multiply: 1,
  screen: 2,
  overlay: 3,
  darken: 4,
  lighten: 5,
  'colour-burn': 6,
  'hard-light': 7,
  'soft-light': 8,
};
