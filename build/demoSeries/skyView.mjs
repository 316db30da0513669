// The sky as one camera sees it, finer than the panorama: clouds have no detail below four pixels.

import { skyRadiance } from './sky.mjs';

export class SkyView {
  /** @param {import('./sky.mjs').SkySettings} settings @param {import('./camera.mjs').Camera} camera */
  constructor(settings, camera) {
    const { widthPx, heightPx, forward, right, up, focalPx } = camera;
    this.factor = Math.min(1, Math.max(0.25, 300 / Math.max(widthPx, heightPx)));
    this.width = Math.ceil(widthPx * this.factor) + 2;
    this.height = Math.ceil(heightPx * this.factor) + 2;
    this.pixels = new Float32Array(this.width * this.height * 3);
    const colour = [0, 0, 0];
    for (let j = 0; j < this.height; j++) {
      const b = (heightPx / 2 - (j + 0.5) / this.factor) / focalPx;
      for (let i = 0; i < this.width; i++) {
        const a = ((i + 0.5) / this.factor - widthPx / 2) / focalPx;
        const x = forward[0] + a * right[0] + b * up[0];
        const y = forward[1] + a * right[1] + b * up[1];
        const z = forward[2] + a * right[2] + b * up[2];
        const length = Math.hypot(x, y, z);
        if (y / length < -0.06) break;
        skyRadiance(settings, x / length, Math.abs(y / length), z / length, colour);
        this.pixels.set(colour, (j * this.width + i) * 3);
      }
    }
  }

  /** Radiance at a picture pixel, into `out`. */
  at(x, y, out) {
    const fx = Math.min(this.width - 1.001, Math.max(0, x * this.factor - 0.5));
    const fy = Math.min(this.height - 1.001, Math.max(0, y * this.factor - 0.5));
    const ix = Math.floor(fx);
    const iy = Math.floor(fy);
    const [ax, ay] = [fx - ix, fy - iy];
    const p = (iy * this.width + ix) * 3;
    const q = p + this.width * 3;
    for (let c = 0; c < 3; c++) {
      const above = this.pixels[p + c] * (1 - ax) + this.pixels[p + 3 + c] * ax;
      const below = this.pixels[q + c] * (1 - ax) + this.pixels[q + 3 + c] * ax;
      out[c] = above * (1 - ay) + below * ay;
    }
  }
}
