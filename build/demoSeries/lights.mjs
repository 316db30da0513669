// The light of each hour: sun, sky, air.

import { unit } from './camera.mjs';

const sunAt = (azimuthDeg, elevationDeg) => {
  const [a, e] = [(azimuthDeg * Math.PI) / 180, (elevationDeg * Math.PI) / 180];
  return unit([Math.sin(a) * Math.cos(e), Math.sin(e), Math.cos(a) * Math.cos(e)]);
};

/** Azimuth 0 is straight over the river (+z), 90 downstream (+x). */
export const lights = {
  fair: {
    sky: {
      sun: sunAt(-118, 34), sunColour: [3.5, 3.1, 2.55], zenith: [0.22, 0.42, 0.85], horizon: [0.95, 1.05, 1.15], ground: [0.3, 0.27, 0.2],
      glow: [1, 0.9, 0.7], glowWidth: 0.25, cover: 0.52, cloudScale: 0.55, cloudLit: [1.9, 1.85, 1.75], cloudShade: [0.75, 0.82, 0.95], seed: 3,
    },
    air: { density: 0.0011 },
  },
};
