// The light of each hour: sun, sky, air.

import { unit } from './camera.mjs';

/** Azimuth 0 is straight over the river (+z), 90 downstream (+x). */
const sunAt = (azimuthDeg, elevationDeg) => {
  const [a, e] = [(azimuthDeg * Math.PI) / 180, (elevationDeg * Math.PI) / 180];
  return unit([Math.sin(a) * Math.cos(e), Math.sin(e), Math.cos(a) * Math.cos(e)]);
};

const fairSky = {
  sun: sunAt(-118, 34),
  sunColour: [3.5, 3.1, 2.55],
  zenith: [0.16, 0.36, 0.82],
  horizon: [0.8, 0.95, 1.12],
  ground: [0.3, 0.27, 0.2],
  glow: [1, 0.9, 0.7],
  glowWidth: 0.25,
  cover: 0.52,
  cloudScale: 0.55,
  cloudLit: [1.9, 1.85, 1.75],
  cloudShade: [0.75, 0.82, 0.95],
  seed: 3,
};

/** @type {Record<string, { sky: import('./sky.mjs').SkySettings, air: { density: number, mist?: number, mistHeightM?: number } }>} */
export const lights = {
  fair: { sky: fairSky, air: { density: 0.0007 } },
  afternoon: {
    sky: {
      ...fairSky,
      sun: sunAt(-142, 27),
      sunColour: [3.7, 2.95, 2.15],
      cover: 0.4,
      cloudScale: 0.42,
      seed: 12,
      glow: [1, 0.8, 0.55],
    },
    air: { density: 0.0009 },
  },
  portrait: {
    sky: {
      ...fairSky,
      sun: sunAt(-152, 30),
      sunColour: [2.9, 2.6, 2.15],
      cover: 0.62,
      seed: 8,
      zenith: [0.3, 0.45, 0.75],
    },
    air: { density: 0.001 },
  },
  mist: {
    sky: {
      ...fairSky,
      sun: sunAt(38, 9),
      sunColour: [0.75, 0.58, 0.42],
      zenith: [0.5, 0.56, 0.68],
      horizon: [1.02, 0.95, 0.9],
      ground: [0.3, 0.29, 0.28],
      glow: [1.1, 0.75, 0.45],
      glowWidth: 0.45,
      cover: 0.2,
      cloudLit: [1, 0.95, 0.9],
      cloudShade: [0.8, 0.8, 0.82],
    },
    air: { density: 0.0035, mist: 0.024, mistHeightM: 5 },
  },
  dusk: {
    sky: {
      ...fairSky,
      sun: sunAt(17, 5.5),
      sunColour: [1.9, 0.95, 0.38],
      zenith: [0.1, 0.15, 0.32],
      horizon: [1, 0.5, 0.26],
      ground: [0.09, 0.075, 0.065],
      glow: [1.7, 0.75, 0.26],
      glowWidth: 0.5,
      cover: 0.56,
      cloudScale: 0.48,
      cloudLit: [1.1, 0.52, 0.32],
      cloudShade: [0.26, 0.22, 0.29],
      seed: 21,
    },
    air: { density: 0.0009 },
  },
  rain: {
    sky: {
      ...fairSky,
      sun: sunAt(-60, 50),
      sunColour: [0.16, 0.16, 0.16],
      zenith: [0.62, 0.66, 0.72],
      horizon: [0.85, 0.9, 0.95],
      ground: [0.2, 0.2, 0.19],
      glow: [0.05, 0.05, 0.05],
      glowWidth: 0.9,
      cover: 0.95,
      cloudScale: 0.5,
      cloudLit: [0.95, 0.99, 1.05],
      cloudShade: [0.55, 0.59, 0.66],
      seed: 33,
    },
    air: { density: 0.0028, mist: 0.002, mistHeightM: 12 },
  },
};
