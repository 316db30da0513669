// Falling rain before the lens: short slanting streaks, the nearer the longer and softer.

import { randomStream } from './seededNoise.mjs';

/**
 * Draws streaks over a picture, in place.
 * @param {Float32Array} rgb @param {number} width @param {number} height
 * @param {{ seed: number, count: number, light: number[] }} rain light: radiance that the drops carry
 */
export function addRainStreaks(rgb, width, height, { seed, count, light }) {
  const next = randomStream(seed);
  for (let i = 0; i < count; i++) {
    const near = next() ** 3;
    const long = height * (0.012 + 0.075 * near);
    const half = Math.max(0.45, (height / 1536) * (0.5 + 2.2 * near));
    const slant = 0.1 + 0.06 * (next() - 0.5);
    const strength = (0.05 + 0.16 * next()) * (1 - 0.55 * near) * Math.min(1, half / 0.8);
    const [x, y] = [next() * width * 1.1, next() * height * 1.1 - long];
    drawStreak(rgb, width, height, { x, y, long, half, slant, strength, light });
  }
}

function drawStreak(rgb, width, height, { x, y, long, half, slant, strength, light }) {
  const reach = Math.ceil(half * 2.5);
  for (let row = Math.max(0, Math.floor(y)); row < Math.min(height, y + long); row++) {
    const t = (row - y) / long;
    const middle = x - slant * (row - y);
    const along = 4 * t * (1 - t) * strength;
    for (let col = Math.floor(middle) - reach; col <= middle + reach; col++) {
      if (col < 0 || col >= width) continue;
      const share = along * Math.exp(-(((col + 0.5 - middle) / half) ** 2));
      const at = (row * width + col) * 3;
      for (let c = 0; c < 3; c++) rgb[at + c] += (light[c] - rgb[at + c]) * share;
    }
  }
}
