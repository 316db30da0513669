// Weathered boards, tarred posts in the tide, old paint and twisted rope.

import { fbm2, fbm3, mix, noise2, noise3, smoothStep } from './seededNoise.mjs';

/** How far the wood's rings wander; shared by relief and colour so that they agree. */
function grainPlace(u, v, w, fp) {
  const wander =
    noise3(u * 0.9, v * 4, w * 4) * 0.016 + noise3(u * 2.3 + 9, v * 9, w * 9) * 0.005 * (fp < 0.02 ? 1 : 0);
  const knotCell = Math.floor(u * 0.8 + Math.floor(v * 3) * 0.37);
  const knotU = (u * 0.8 + Math.floor(v * 3) * 0.37 - knotCell - 0.5) / 0.8;
  const knotV = v - (Math.floor(v * 3) + 0.5) / 3 + noise2(knotCell * 7.3, Math.floor(v * 3) * 3.1) * 0.05;
  const away = (knotU * knotU) / 0.0036 + (knotV * knotV) / 0.0006;
  return { ring: v + w * 0.7 + wander + 0.012 * Math.exp(-away * 0.22), knot: Math.exp(-away * 1.1) };
}

const crackAt = (u, v, w) => {
  const n = noise3(u * 1.1 + 31, v * 24, w * 24 + 7);
  return smoothStep(0.045, 0, Math.abs(n)) * smoothStep(-0.1, 0.35, noise3(u * 0.7, v * 7 + 3, w * 7));
};

export function woodRelief(u, v, w, fp) {
  if (fp > 0.03) return 0;
  const { ring } = grainPlace(u, v, w, fp);
  const lines = fp < 0.006 ? noise2(ring * 190, u * 0.7 + w * 3) * 0.0007 : 0;
  const fibres = fp < 0.003 ? noise3(u * 9, v * 420, w * 420) * 0.0002 : 0;
  const groove = fp < 0.01 ? crackAt(u, v, w) * -0.0028 : 0;
  return lines + fibres + groove + noise2(ring * 42, u * 0.35 + 5) * 0.0012;
}

/** @param {import('./materials.mjs').Sample} s */
export function woodColour(s) {
  const { u, v, w, footprint: fp } = s;
  const { ring, knot } = grainPlace(u, v, w, fp);
  const broad = noise2(ring * 42, u * 0.35 + 5) * smoothStep(0.03, 0.008, fp);
  const fine = noise2(ring * 190, u * 0.7 + w * 3) * smoothStep(0.007, 0.002, fp);
  const fibre = fp < 0.004 ? noise3(u * 9, v * 420, w * 420) * smoothStep(0.004, 0.001, fp) : 0;
  const patch = fbm3(u * 0.8, v * 3, w * 3, 4, fp * 3);
  const k = 0.86 + 0.17 * broad + 0.17 * fine + 0.1 * fibre + 0.45 * patch;
  const [r, g, b] = [s.r * k, s.g * k, s.b * k];
  const warm = smoothStep(-0.2, 0.4, patch + broad * 0.3) * 0.4;
  s.r = mix(r, r * 1.22, warm);
  s.g = g;
  s.b = mix(b, b * 0.74, warm);
  const dark = Math.max(knot * 0.75, crackAt(u, v, w) * 0.85 * smoothStep(0.012, 0.003, fp));
  s.r *= 1 - dark;
  s.g *= 1 - dark;
  s.b *= 1 - dark * 0.95;
  s.gloss = 0.03;
  s.sharpness = 14;
}

/** Posts that stand in the tide: weed below, a pale dry line, bleached above. @param {import('./materials.mjs').Sample} s */
export function postColour(s) {
  woodColour(s);
  const fp = s.footprint;
  const ragged = fbm3(s.px * 7, s.py * 3, s.pz * 7, 4, fp * 7) * 0.35;
  const damp = smoothStep(1.25, 0.8, s.py + ragged);
  const weed = smoothStep(0.62, 0.3, s.py + ragged);
  const tuft = fbm3(s.px * 30, s.py * 9, s.pz * 30, 4, fp * 25);
  for (const [channel, wetTone, weedTone] of [
    ['r', 0.035, 0.022],
    ['g', 0.032, 0.034],
    ['b', 0.022, 0.01],
  ]) {
    s[channel] = mix(s[channel], wetTone * (1 + tuft), damp * 0.75);
    s[channel] = mix(s[channel], weedTone * (1 + 2.4 * tuft), weed * 0.9);
  }
  const shells =
    smoothStep(0.34, 0.5, noise3(s.px * 42, s.py * 42, s.pz * 42)) *
    smoothStep(1, 0.7, s.py) *
    smoothStep(0.25, 0.5, s.py);
  if (fp < 0.02) {
    s.r += (0.4 - s.r) * shells * 0.6;
    s.g += (0.38 - s.g) * shells * 0.6;
    s.b += (0.33 - s.b) * shells * 0.6;
  }
  s.gloss = 0.03 + 0.05 * damp;
  s.sharpness = mix(14, 60, damp);
}

/** Paint that has seen weather: chalky, streaked, flaked to the wood. @param {import('./materials.mjs').Sample} s */
export function paintColour(s) {
  const { u, v, w, footprint: fp } = s;
  const [r, g, b] = [s.r, s.g, s.b];
  const streak = fbm3(s.px * 5, s.py * 0.5, s.pz * 5, 4, fp * 5);
  const chalk = fbm3(u * 1.3, v * 1.3, w * 1.3, 4, fp);
  const k = 0.9 + 0.3 * chalk + 0.22 * streak;
  const flake = smoothStep(
    0.2,
    0.27,
    fbm3(u * 2.2, v * 5, w * 5, 6, fp * 4) + 0.1 * noise3(u * 30, v * 90, w * 90),
  );
  s.r = 0.36;
  s.g = 0.33;
  s.b = 0.29;
  woodColour(s);
  const bare = flake * 0.85;
  s.r = mix((r + 0.02) * k, s.r, bare);
  s.g = mix((g + 0.02) * k, s.g, bare);
  s.b = mix((b + 0.02) * k, s.b, bare);
  const rust = smoothStep(0.34, 0.52, streak + 0.5 * noise3(s.px * 2.1, s.py * 0.2, s.pz * 2.1)) * 0.5;
  s.r = mix(s.r, 0.22, rust);
  s.g = mix(s.g, 0.1, rust);
  s.b = mix(s.b, 0.045, rust);
  const slime = smoothStep(0.3, 0.02, s.py + 0.2 * streak) * smoothStep(-0.05, 0.02, s.py);
  s.r = mix(s.r, 0.03, slime * 0.8);
  s.g = mix(s.g, 0.04, slime * 0.8);
  s.b = mix(s.b, 0.016, slime * 0.8);
  s.gloss = mix(0.045, 0.015, bare);
  s.sharpness = 50;
}

/** Place on the lay of a three-strand rope: 0…1 across a strand. */
const layOf = (u, v) => ((((u * 1 + v * 0.9) / 0.034) % 1) + 1) % 1;

export function ropeRelief(u, v, fp) {
  const across = layOf(u, v) - 0.5;
  const yarn = fp < 0.002 ? Math.sin((u * 0.9 - v * 0.8) * 2600) * 0.00022 : 0;
  return -across * across * 0.02 + yarn + fbm2(u * 240, v * 700, 2, fp * 400) * 0.0004;
}

/** @param {import('./materials.mjs').Sample} s */
export function ropeColour(s) {
  const fp = s.footprint;
  const across = Math.abs(layOf(s.u, s.v) - 0.5) * 2;
  const groove = smoothStep(0.012, 0.004, fp) * smoothStep(0.65, 1, across) * 0.6;
  const fibre = fbm2(s.u * 300 - s.v * 260, s.v * 900 + s.u * 700, 3, fp * 500);
  const soil = fbm3(s.px * 5, s.py * 5, s.pz * 5, 4, fp * 5);
  const k = (0.92 + 0.5 * fibre + 0.55 * soil) * (1 - groove);
  s.r *= k;
  s.g *= k;
  s.b *= k * (0.95 - soil * 0.2);
  s.gloss = 0.015;
  s.sharpness = 10;
}
