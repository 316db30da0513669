// The plates of the series: where each was taken from, in what light, with which camera.

import { landingScene } from './frameScenes.mjs';

export const frames = [
  {
    name: 'plate-1-landing', widthPx: 4000, heightPx: 3000, orientation: 1, quality: 92,
    view: { eye: [-4.6, 2.75, -10.4], target: [3.2, 1.15, 9], fovDeg: 62, rollDeg: 0.4 },
    light: 'fair', scene: landingScene,
    lens: { focusM: 16, blurShare: 0.0016, flare: 0.05, falloff: 0.34 },
    sensor: { exposure: 0.62, balance: [1.02, 1, 0.97], shotNoise: 0.0004, readNoise: 0.002, contrast: 0.35, seed: 11 },
  },
];
