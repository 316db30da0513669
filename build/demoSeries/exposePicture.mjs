// From a scene to the light on the sensor: shadows, the water's mirror picture, then the picture itself
// band by band. Four visibility samples a pixel; each triangle among them is shaded once, so plain areas
// cost one sample and leaves and edges cost up to four.

import { mirroredCamera, resizedCamera } from './camera.mjs';
import { castsShadow } from './materials.mjs';
import { pixelNoise, Shader } from './shader.mjs';
import { SkyView } from './skyView.mjs';
import { DepthMap } from './sunlight.mjs';
import { Visibility } from './visibility.mjs';
import { Reflection } from './water.mjs';

/**
 * @param {import('./shader.mjs').LitScene & { centre: number[], reachM: number, overheadSpreadM?: number }} scene
 * @param {import('./camera.mjs').Camera} camera
 * @returns {{ rgb: Float32Array, depth: Float32Array }} radiance, and distance along the view axis (0: sky)
 */
export function exposePicture(scene, camera) {
  addLightMaps(scene, Math.max(camera.widthPx, camera.heightPx) < 1500 ? 1024 : 2048);
  if (scene.water) addReflection(scene, camera);
  scene.skyView = new SkyView(scene.sky.settings, camera);
  scene.occlusion = new Occlusion(scene, camera);
  const { widthPx, heightPx } = camera;
  const rgb = new Float32Array(widthPx * heightPx * 3);
  const depth = new Float32Array(widthPx * heightPx);
  const seen = new Visibility(scene.mesh, camera, { grid: 2, bandRows: 128 });
  const shader = new Shader(scene, camera);
  for (let band = 0; band < seen.bandCount; band++) {
    const target = seen.drawBand(band);
    for (let row = 0; row < target.rows; row += 2) shadeRow(shader, target, row, rgb, depth, widthPx);
  }
  return { rgb, depth };
}

function shadeRow(shader, target, row, rgb, depth, widthPx) {
  const { ids, width } = target;
  const y = (target.top + row) >> 1;
  for (let x = 0; x < widthPx; x++) {
    const at = row * width + x * 2;
    const samples = [ids[at], ids[at + 1], ids[at + width], ids[at + width + 1]];
    let r = 0;
    let g = 0;
    let b = 0;
    let w = 0;
    for (let k = 0; k < 4; k++) {
      const id = samples[k];
      if (id === -2) continue;
      let count = 1;
      let sumX = k & 1;
      let sumY = k >> 1;
      for (let j = k + 1; j < 4; j++)
        if (samples[j] === id) {
          count++;
          sumX += j & 1;
          sumY += j >> 1;
          samples[j] = -2;
        }
      const sx = x + 0.25 + (0.5 * sumX) / count;
      const sy = y + 0.25 + (0.5 * sumY) / count;
      if (id === -1) shader.sampleSky(sx, sy);
      else shader.sample(id, sx, sy);
      const weight = count * 0.25;
      // one blazing sample must not outshine the whole pixel's edge
      r += weight * Math.min(12, shader.r);
      g += weight * Math.min(12, shader.g);
      b += weight * Math.min(12, shader.b);
      if (shader.w > 0 && (w === 0 || shader.w < w)) w = shader.w;
    }
    const out = y * widthPx + x;
    rgb[out * 3] = r;
    rgb[out * 3 + 1] = g;
    rgb[out * 3 + 2] = b;
    depth[out] = w;
  }
}

/** Penumbras are given for maps of 2048 texels; smaller pictures make do with smaller maps. */
function addLightMaps(scene, sizePx) {
  const { mesh, centre, reachM } = scene;
  scene.penumbra *= sizePx / 2048;
  const { sun } = scene.sky.settings;
  scene.shadows = [
    new DepthMap(mesh, sun, centre, reachM, sizePx, castsShadow, reachM < 20),
    new DepthMap(mesh, sun, centre, reachM * 7, (sizePx * 3) / 4, castsShadow, reachM < 5),
  ];
  scene.overhead = new DepthMap(
    mesh,
    [0.04, 1, 0.03],
    centre,
    reachM * 1.5,
    sizePx / 2,
    castsShadow,
    reachM < 20,
  );
  scene.overhead.spreadM = scene.overheadSpreadM ?? 0.5;
}

function addReflection(scene, camera) {
  const factor = Math.min(0.5, 1400 / Math.max(camera.widthPx, camera.heightPx));
  const small = mirroredCamera(resizedCamera(camera, factor));
  const { widthPx, heightPx } = small;
  const rgb = new Float32Array(widthPx * heightPx * 3);
  const depth = new Float32Array(widthPx * heightPx);
  const seen = new Visibility(scene.mesh, small, { aboveWaterOnly: true });
  const shader = new Shader(scene, small, true);
  for (let band = 0; band < seen.bandCount; band++) {
    const target = seen.drawBand(band);
    for (let i = 0; i < target.rows * widthPx; i++) {
      const id = target.ids[i];
      if (id < 0) continue;
      const at = target.top * widthPx + i;
      shader.sample(id, (i % widthPx) + 0.5, target.top + Math.floor(i / widthPx) + 0.5);
      rgb[at * 3] = shader.r;
      rgb[at * 3 + 1] = shader.g;
      rgb[at * 3 + 2] = shader.b;
      depth[at] = shader.w;
    }
  }
  scene.reflection = new Reflection(small, rgb, depth, scene.sky, factor);
}

/** Hollows and corners receive less of the sky: found on a small depth picture. */
class Occlusion {
  constructor(scene, camera) {
    this.factor = Math.min(0.5, 900 / Math.max(camera.widthPx, camera.heightPx));
    const small = resizedCamera(camera, this.factor);
    this.width = small.widthPx;
    this.height = small.heightPx;
    const depth = new Float32Array(this.width * this.height);
    const seen = new Visibility(scene.mesh, small, { nearOnly: scene.reachM < 20 });
    for (let band = 0; band < seen.bandCount; band++) {
      const target = seen.drawBand(band);
      for (let i = 0; i < target.rows * this.width; i++) depth[target.top * this.width + i] = target.depth[i];
    }
    const raw = this.#measure(depth, small.focalPx, scene.hollowM ?? 0.6);
    this.open = this.#smooth(raw, depth);
  }

  #measure(inverse, focalPx, radiusM) {
    const { width, height } = this;
    const open = new Float32Array(width * height);
    for (let y = 0; y < height; y++)
      for (let x = 0; x < width; x++) {
        const k = inverse[y * width + x];
        const at = y * width + x;
        open[at] = 1;
        if (k <= 0) continue;
        const w = 1 / k;
        const radius = Math.min(70, radiusM * focalPx * k);
        if (radius < 1.2) continue;
        const turn = pixelNoise(x, y, 5) * 6.2832;
        let shut = 0;
        for (let i = 0; i < 8; i++) {
          const angle = turn + i * 0.7854;
          const r = radius * (0.25 + 0.75 * (((i * 5) % 8) / 8));
          const [cx, cy] = [Math.cos(angle) * r, Math.sin(angle) * r];
          // opposite pairs cancel on any plane, whatever its tilt
          const one = this.#depthAt(inverse, x + cx, y + cy, w);
          const two = this.#depthAt(inverse, x - cx, y - cy, w);
          const rise = w - (one + two) / 2;
          const reach = (r / focalPx) * w;
          if (rise > 0.05 * reach)
            shut += Math.min(1, (rise / reach) * 1.3) * Math.max(0, 1 - rise / (radiusM * 2.5));
        }
        open[at] = 1 - (shut / 8) * 0.8;
      }
    return open;
  }

  #depthAt(inverse, x, y, own) {
    const cx = Math.min(this.width - 1, Math.max(0, Math.round(x)));
    const cy = Math.min(this.height - 1, Math.max(0, Math.round(y)));
    const k = inverse[cy * this.width + cx];
    return k > 0 ? 1 / k : own * 2;
  }

  #smooth(raw, inverse) {
    const { width, height } = this;
    const out = new Float32Array(raw.length);
    for (let y = 0; y < height; y++)
      for (let x = 0; x < width; x++) {
        const own = inverse[y * width + x];
        let sum = 0;
        let total = 0;
        for (let j = -2; j <= 2; j++)
          for (let i = -2; i <= 2; i++) {
            const at =
              Math.min(height - 1, Math.max(0, y + j)) * width + Math.min(width - 1, Math.max(0, x + i));
            const weight = Math.abs(inverse[at] - own) < own * 0.04 ? 1 : 0.02;
            sum += raw[at] * weight;
            total += weight;
          }
        out[y * width + x] = sum / total;
      }
    return out;
  }

  /** Share of the sky open at a picture pixel. */
  at(x, y) {
    const fx = Math.min(this.width - 1.001, Math.max(0, x * this.factor - 0.5));
    const fy = Math.min(this.height - 1.001, Math.max(0, y * this.factor - 0.5));
    const ix = fx | 0;
    const iy = fy | 0;
    const at = iy * this.width + ix;
    const [ax, ay] = [fx - ix, fy - iy];
    const o = this.open;
    return (
      (o[at] * (1 - ax) + o[at + 1] * ax) * (1 - ay) +
      (o[at + this.width] * (1 - ax) + o[at + this.width + 1] * ax) * ay
    );
  }
}
