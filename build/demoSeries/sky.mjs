// The sky as a panorama, and the light it sheds on a surface.

import { fbm2, mix, smoothStep } from './seededNoise.mjs';

/** @typedef {import('./mesh.mjs').Triple} Triple */
/**
 * @typedef {object} SkySettings
 * @property {Triple} sun direction towards the sun
 * @property {Triple} sunColour light on a surface square to the sun, divided by π
 * @property {Triple} zenith @property {Triple} horizon @property {Triple} ground radiances
 * @property {Triple} glow colour of the brightening around the sun
 * @property {number} glowWidth 0…1
 * @property {number} cover cloud cover 0…1
 * @property {number} cloudScale @property {Triple} cloudLit @property {Triple} cloudShade
 * @property {number} seed
 */

const width = 512;
const height = 256;

export class Sky {
  /** @param {SkySettings} settings */
  constructor(settings) {
    this.settings = settings;
    this.pixels = new Float32Array(width * height * 3);
    const colour = [0, 0, 0];
    for (let j = 0; j < height; j++) {
      const elevation = (0.5 - (j + 0.5) / height) * Math.PI;
      for (let i = 0; i < width; i++) {
        const azimuth = ((i + 0.5) / width) * 2 * Math.PI - Math.PI;
        const flat = Math.cos(elevation);
        skyRadiance(
          settings,
          Math.sin(azimuth) * flat,
          Math.sin(elevation),
          Math.cos(azimuth) * flat,
          colour,
        );
        this.pixels.set(colour, (j * width + i) * 3);
      }
    }
    this.harmonics = this.#projectHarmonics();
  }

  /** Radiance from a direction of unit length, into `out`. */
  look(x, y, z, out) {
    const u = (Math.atan2(x, z) / (2 * Math.PI) + 0.5) * width - 0.5;
    const v = (0.5 - Math.asin(y > 1 ? 1 : y < -1 ? -1 : y) / Math.PI) * height - 0.5;
    const iu = Math.floor(u);
    const fu = u - iu;
    const iv = v < 0 ? 0 : v >= height - 1 ? height - 2 : Math.floor(v);
    const fv = v - iv < 0 ? 0 : v - iv > 1 ? 1 : v - iv;
    const a = (iv * width + ((iu + width) & (width - 1))) * 3;
    const b = (iv * width + ((iu + 1) & (width - 1))) * 3;
    const p = this.pixels;
    const row = width * 3;
    const wa = (1 - fu) * (1 - fv);
    const wb = fu * (1 - fv);
    const wc = (1 - fu) * fv;
    const wd = fu * fv;
    out[0] = p[a] * wa + p[b] * wb + p[a + row] * wc + p[b + row] * wd;
    out[1] = p[a + 1] * wa + p[b + 1] * wb + p[a + row + 1] * wc + p[b + row + 1] * wd;
    out[2] = p[a + 2] * wa + p[b + 2] * wb + p[a + row + 2] * wc + p[b + row + 2] * wd;
  }

  /** Second-order spherical harmonics of the irradiance over π (Ramamoorthi and Hanrahan 2001). */
  #projectHarmonics() {
    const sums = new Float64Array(27);
    for (let j = 0; j < height; j += 2) {
      const elevation = (0.5 - (j + 0.5) / height) * Math.PI;
      const solidAngle = ((2 * Math.PI) / (width / 2)) * (Math.PI / (height / 2)) * Math.cos(elevation);
      for (let i = 0; i < width; i += 2) {
        const azimuth = ((i + 0.5) / width) * 2 * Math.PI - Math.PI;
        const x = Math.sin(azimuth) * Math.cos(elevation);
        const y = Math.sin(elevation);
        const z = Math.cos(azimuth) * Math.cos(elevation);
        const basis = harmonicBasis(x, y, z);
        const at = (j * width + i) * 3;
        for (let k = 0; k < 9; k++)
          for (let c = 0; c < 3; c++) sums[k * 3 + c] += basis[k] * this.pixels[at + c] * solidAngle;
      }
    }
    const bandGain = [1, 2 / 3, 2 / 3, 2 / 3, 0.25, 0.25, 0.25, 0.25, 0.25];
    return sums.map((value, i) => value * bandGain[Math.floor(i / 3)]);
  }

  /** Light of the whole sky and ground on a surface facing (x, y, z), over π, into `out`. */
  shed(x, y, z, out) {
    const h = this.harmonics;
    const b4 = 1.092548 * x * y;
    const b5 = 1.092548 * y * z;
    const b6 = 0.315392 * (3 * z * z - 1);
    const b7 = 1.092548 * x * z;
    const b8 = 0.546274 * (x * x - y * y);
    for (let c = 0; c < 3; c++) {
      const value =
        0.282095 * h[c] +
        0.488603 * (y * h[3 + c] + z * h[6 + c] + x * h[9 + c]) +
        b4 * h[12 + c] +
        b5 * h[15 + c] +
        b6 * h[18 + c] +
        b7 * h[21 + c] +
        b8 * h[24 + c];
      out[c] = value > 0.001 ? value : 0.001;
    }
  }
}

function harmonicBasis(x, y, z) {
  return [
    0.282095,
    0.488603 * y,
    0.488603 * z,
    0.488603 * x,
    1.092548 * x * y,
    1.092548 * y * z,
    0.315392 * (3 * z * z - 1),
    1.092548 * x * z,
    0.546274 * (x * x - y * y),
  ];
}

/** Radiance of the sky from a direction of unit length, into `out`. @param {SkySettings} s */
export function skyRadiance(s, x, y, z, out) {
  if (y < -0.02) {
    const t = smoothStep(-0.02, -0.2, y);
    for (let c = 0; c < 3; c++) out[c] = mix(s.horizon[c] * 0.6, s.ground[c], t);
    return;
  }
  const toSun = x * s.sun[0] + y * s.sun[1] + z * s.sun[2];
  const rise = Math.max(0, y) ** 0.55;
  const halo =
    Math.exp((toSun - 1) / (0.002 + 0.04 * s.glowWidth)) * 1.6 +
    Math.exp((toSun - 1) / (0.05 + 0.5 * s.glowWidth)) * 0.55;
  for (let c = 0; c < 3; c++) out[c] = mix(s.horizon[c], s.zenith[c], rise) + s.glow[c] * halo;
  if (s.cover > 0) addCloud(s, x, y, z, toSun, out);
}

function cloudDensity(s, u, v) {
  const warpU = fbm2(u * 0.7 + 3.1, v * 0.7 + s.seed, 3);
  const warpV = fbm2(u * 0.7 + 9.7, v * 0.7 - s.seed, 3);
  return fbm2(u + warpU * 0.9 + s.seed, v * 1.25 + warpV * 0.9, 6) + (s.cover - 0.5) * 1.1;
}

function addCloud(s, x, y, z, toSun, out) {
  const reach = s.cloudScale / (Math.max(0, y) + 0.13);
  const u = x * reach;
  const v = z * reach;
  const density = cloudDensity(s, u, v);
  if (density <= 0) return;
  const sunReach = s.cloudScale * 0.16;
  const behind = cloudDensity(s, u + s.sun[0] * sunReach, v + s.sun[2] * sunReach);
  const thick = smoothStep(0, 0.42, density);
  const lit = Math.min(1, Math.max(0, 0.62 - (behind - density) * 1.5 - density * 0.75));
  const edgeGlow = Math.max(0, toSun) ** 8 * (1 - thick) * 0.8;
  const opacity = thick * smoothStep(-0.01, 0.1, y) * 0.94;
  for (let c = 0; c < 3; c++) {
    const cloud = mix(s.cloudShade[c], s.cloudLit[c], lit) + s.glow[c] * edgeGlow;
    const hazed = mix(s.horizon[c], cloud, smoothStep(0, 0.3, y) * 0.75 + 0.25);
    out[c] = mix(out[c], hazed, opacity);
  }
}
