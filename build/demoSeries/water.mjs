// The river's surface: ripples, what they mirror, and what shows through them.

import { fbm2, noise2, smoothStep } from './seededNoise.mjs';

/**
 * @typedef {object} WaterSettings
 * @property {number} ripple 0 glassy … 1 breezy
 * @property {[number, number, number]} body colour of the depth, as an albedo
 * @property {number} [rain] 0…1 rings of falling drops
 */

const slope = [0, 0];

/** Slopes of the ripples at a place, and how much of them is too fine to draw. Into `slope`. */
function rippleSlope(settings, x, z, fp) {
  const calm = smoothStep(-0.32, 0.3, fbm2(x * 0.045 + 3, z * 0.16, 4) + (settings.ripple - 0.5) * 0.5);
  let sx = 0;
  let sz = 0;
  let left = 0;
  let length = 2.1;
  let steep = 0.02 + settings.ripple * 0.05;
  let c = 0.94;
  let s = 0.34;
  for (let i = 0; i < 6; i++) {
    const size = fp / length;
    const fade = size > 0.8 ? 0 : size > 0.25 ? (0.8 - size) / 0.55 : 1;
    const weight = steep * (i < 2 ? 0.35 + 0.65 * calm : calm);
    left += weight * (1 - fade);
    if (fade > 0) {
      const px = (x * c + z * s) / (length * 1.9);
      const pz = (z * c - x * s) / length;
      const e = 0.07;
      const h = noise2(px, pz + i * 7.7);
      const du = ((noise2(px + e, pz + i * 7.7) - h) / e) * weight * fade * 0.55;
      const dv = ((noise2(px, pz + e + i * 7.7) - h) / e) * weight * fade;
      sx += du * c - dv * s;
      sz += du * s + dv * c;
    }
    const turned = c * 0.86 - s * 0.51 * (i % 2 ? -1 : 1);
    s = s * 0.86 + c * 0.51 * (i % 2 ? -1 : 1);
    c = turned;
    length *= 0.47;
    steep *= 0.86;
  }
  if (settings.rain) addRainRings(settings.rain, x, z, fp);
  slope[0] = sx + ringSlope[0];
  slope[1] = sz + ringSlope[1];
  return left;
}

const ringSlope = [0, 0];

function addRainRings(rain, x, z, fp) {
  ringSlope[0] = 0;
  ringSlope[1] = 0;
  if (fp > 0.06) return;
  for (let layer = 0; layer < 2; layer++) {
    const cell = 0.45 - layer * 0.17;
    const i = Math.floor(x / cell);
    const j = Math.floor(z / cell);
    const chance = noise2(i * 13.71 + layer * 5, j * 7.37);
    if (chance < 0.42 - rain * 0.7) continue;
    const dx = x - (i + 0.5 + noise2(i * 3.3, j * 9.1) * 0.2) * cell;
    const dz = z - (j + 0.5 + noise2(i * 9.3, j * 2.1) * 0.2) * cell;
    const r = Math.hypot(dx, dz) || 1e-4;
    const front = cell * 0.42 * Math.abs(noise2(i * 5.9 + 2, j * 4.7)) * 1.8;
    const wave =
      Math.sin((r - front) * 190) *
      Math.exp(-(((r - front) / 0.022) ** 2)) *
      0.32 *
      smoothStep(cell * 0.5, cell * 0.3, r);
    ringSlope[0] += (wave * dx) / r;
    ringSlope[1] += (wave * dz) / r;
  }
}

const sky = [0, 0, 0];
const mirrored = [0, 0, 0];

/**
 * Radiance of the water at a place.
 * @param {object} scene the shader's scene: sky, water, reflection, bedHeight, sun…
 * @param {{ px: number, pz: number, dx: number, dy: number, dz: number, t: number, footprint: number, noise: number, sunOpen: number, ambient: number[], out: number[] }} at
 *   place, unit view direction, distance, pixel size, a random number for the pixel
 */
export function waterColour(scene, at) {
  const { px, pz, dx, dy, dz, out } = at;
  const grazing = Math.max(0.03, -dy);
  const left = rippleSlope(scene.water, px, pz, at.footprint / Math.sqrt(grazing));
  const jitter = (at.noise - 0.5) * 2;
  let nx = -slope[0] + left * 0.06 * jitter * dx;
  let nz = -slope[1] + left * (0.12 + 0.08 * jitter) * dz;
  const damp = Math.min(1, grazing * 6 + 0.25);
  nx *= damp;
  nz *= damp;
  const inverse = 1 / Math.sqrt(nx * nx + nz * nz + 1);
  nx *= inverse;
  nz *= inverse;
  const ny = inverse;
  let facing = -(dx * nx + dy * ny + dz * nz);
  if (facing < 0.02) facing = 0.02;
  const fresnel = 0.02 + 0.98 * (1 - facing) ** 5 * (1 - Math.min(0.45, left * 1.5));
  const rx = dx + 2 * facing * nx;
  let ry = dy + 2 * facing * ny;
  const rz = dz + 2 * facing * nz;
  if (ry < 0.012) ry = 0.012 + (0.012 - ry) * 0.3;
  lookSpread(scene.reflection, at, rx, ry, rz, Math.min(0.12, left * 0.7 * damp));
  const depth = scene.bedHeight ? -scene.bedHeight(px, pz) : 5;
  const clear = depth < 2 ? Math.exp(-Math.max(0, depth) * 4.5) : 0;
  const { body } = scene.water;
  const sunlit = 0.35 + 0.65 * at.sunOpen;
  const silt = 0.85 + 0.3 * fbm2(px * 0.06, pz * 0.1, 3);
  const bedTone = 0.55 + 0.5 * fbm2(px * 3 + slope[0] * 2, pz * 4 + slope[1] * 2, 4, at.footprint * 3);
  const sun = scene.sky.settings.sun;
  const sunUp = Math.max(0, sun[1]);
  const glint = sunGlint(scene, at, nx, ny, nz, left, facing);
  for (let c = 0; c < 3; c++) {
    const light = at.ambient[c] + scene.sky.settings.sunColour[c] * sunUp * sunlit;
    const bed = scene.bedColour ? scene.bedColour[c] * bedTone : body[c];
    const under = light * (body[c] * silt + (bed * 0.6 - body[c] * silt) * clear);
    out[c] = under * (1 - fresnel) + mirrored[c] * fresnel + glint * scene.sky.settings.sunColour[c];
  }
}

/** Ripples too fine to draw tilt the ray both ways: three looks stand for them. */
function lookSpread(reflection, at, rx, ry, rz, spread) {
  reflection.look(at, rx, ry, rz, mirrored);
  if (spread < 0.002) return;
  for (const side of spreads) {
    const lifted = Math.max(0.012, ry + side * spread * (0.75 + 0.5 * at.noise));
    const k = 1 / Math.sqrt(rx * rx + lifted * lifted + rz * rz);
    reflection.look(at, rx * k, lifted * k, rz * k, aside);
    for (let c = 0; c < 3; c++) mirrored[c] += aside[c];
  }
  for (let c = 0; c < 3; c++) mirrored[c] /= 1 + spreads.length;
}

const spreads = [-0.8, 0.9, 1.9];
const aside = [0, 0, 0];

function sunGlint(scene, at, nx, ny, nz, left, facing) {
  const sun = scene.sky.settings.sun;
  const hx = sun[0] - at.dx;
  const hy = sun[1] - at.dy;
  const hz = sun[2] - at.dz;
  const along = (nx * hx + ny * hy + nz * hz) / Math.sqrt(hx * hx + hy * hy + hz * hz);
  if (along < 0.8) return 0;
  const exponent = 900 / (1 + left * left * 1600);
  const f = 0.02 + 0.98 * (1 - facing) ** 5;
  return Math.min(8, ((exponent + 8) / 8) * along ** exponent * f) * at.sunOpen * Math.max(0, sun[1]);
}

/** The scene as still water would show it, to be looked up along bent rays. */
export class Reflection {
  /**
   * @param {import('./camera.mjs').Camera} camera the mirrored camera of the reflection picture
   * @param {Float32Array} rgb @param {Float32Array} depth distance along the view axis, 0 for sky
   * @param {import('./sky.mjs').Sky} panorama @param {number} toPixels from the picture's pixels to these
   */
  constructor(camera, rgb, depth, panorama, toPixels) {
    Object.assign(this, { camera, rgb, depth, panorama, toPixels });
  }

  look(at, rx, ry, rz, out) {
    const { camera, depth } = this;
    const { widthPx, heightPx, eye, right, up, forward, focalPx } = camera;
    const x0 = Math.min(widthPx - 1, Math.max(0, Math.floor(at.screenX * this.toPixels)));
    const y0 = Math.min(heightPx - 1, Math.max(0, Math.floor(at.screenY * this.toPixels)));
    const straight = depth[y0 * widthPx + x0];
    const away = straight > 0 ? Math.max(0.02, (straight / at.w - 1) * at.t) : 4000;
    const qx = at.px + rx * away - eye[0];
    const qy = ry * away - eye[1];
    const qz = at.pz + rz * away - eye[2];
    const w = qx * forward[0] + qy * forward[1] + qz * forward[2];
    this.panorama.look(rx, ry, rz, sky);
    out[0] = sky[0];
    out[1] = sky[1];
    out[2] = sky[2];
    if (w <= 0.01) return;
    const x = widthPx / 2 + (focalPx * (qx * right[0] + qy * right[1] + qz * right[2])) / w - 0.5;
    const y = heightPx / 2 - (focalPx * (qx * up[0] + qy * up[1] + qz * up[2])) / w - 0.5;
    this.#blend(x, y, out);
  }

  #blend(x, y, out) {
    const { widthPx, heightPx } = this.camera;
    const cx = x < 0 ? 0 : x > widthPx - 1.001 ? widthPx - 1.001 : x;
    const cy = y < 0 ? 0 : y > heightPx - 1.001 ? heightPx - 1.001 : y;
    const ix = cx | 0;
    const iy = cy | 0;
    const fx = cx - ix;
    const fy = cy - iy;
    let r = 0;
    let g = 0;
    let b = 0;
    let seen = 0;
    for (let k = 0; k < 4; k++) {
      const at = (iy + (k >> 1)) * widthPx + ix + (k & 1);
      if (this.depth[at] <= 0) continue;
      const weight = (k & 1 ? fx : 1 - fx) * (k >> 1 ? fy : 1 - fy);
      seen += weight;
      r += weight * this.rgb[at * 3];
      g += weight * this.rgb[at * 3 + 1];
      b += weight * this.rgb[at * 3 + 2];
    }
    out[0] = out[0] * (1 - seen) + r;
    out[1] = out[1] * (1 - seen) + g;
    out[2] = out[2] * (1 - seen) + b;
  }
}
