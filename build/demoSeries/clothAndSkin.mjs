// Canvas and wool, skin, eyes, hair and feathers.

import { fbm2, fbm3, mix, noise2, noise3, smoothStep } from './seededNoise.mjs';

export function clothRelief(u, v, w, fp) {
  const crease = fbm3(u * 7, v * 7, w * 7, 4, fp * 7) * 0.005;
  const thread = fp < 0.0003 ? (Math.sin(u * 3800) + Math.sin(v * 3800 + w * 900)) * 0.00006 : 0;
  return crease + Math.abs(noise3(u * 19, v * 13, w * 19)) * -0.0012 + thread;
}

/** @param {import('./materials.mjs').Sample} s */
export function clothColour(s) {
  const { u, v, w, footprint: fp } = s;
  const stain = fbm3(u * 1.7, v * 1.7, w * 1.7, 5, fp * 2);
  const slub = fbm2(u * 420 + w * 90, v * 60, 2, fp * 300) + fbm2(u * 60, v * 420 + w * 90, 2, fp * 300);
  const k = 0.94 + 0.38 * stain + 0.1 * slub;
  s.r *= k;
  s.g *= k * (1 - 0.05 * stain);
  s.b *= k * (1 - 0.12 * stain);
  s.through = 0.3;
  s.gloss = 0.012;
  s.sharpness = 10;
}

/** Stitches, as a height. */
export function knitRelief(u, v) {
  const column = (((u / 0.006) % 1) + 1) % 1;
  const lean = Math.abs(column - 0.5) * 0.006;
  const row = ((((v + lean * 1.3) / 0.005) % 1) + 1) % 1;
  return (
    0.0011 * Math.sin(row * Math.PI) * (0.35 + Math.sin(column * 2 * Math.PI) ** 2) +
    noise2(u * 300, v * 300) * 0.0002
  );
}

export function skinRelief(u, v, w, fp) {
  const pores = fp < 0.001 ? fbm3(u * 900, v * 900, w * 900, 2, fp * 700) * 0.00009 : 0;
  const lines = noise3(u * 90, v * 330, w * 90);
  return (
    pores -
    smoothStep(0.22, 0, Math.abs(lines)) * 0.00006 +
    fbm3(u * 130, v * 130, w * 130, 3, fp * 130) * 0.00032
  );
}

/** @param {import('./materials.mjs').Sample} s */
export function skinColour(s) {
  const { u, v, w, footprint: fp } = s;
  const blotch = fbm3(u * 38, v * 38, w * 38, 4, fp * 40);
  const fleck = smoothStep(0.36, 0.62, noise3(u * 210, v * 210, w * 210)) * smoothStep(0.0012, 0.0004, fp);
  s.r *= 1 + 0.08 * blotch - fleck * 0.12;
  s.g *= 1 - 0.06 * blotch - fleck * 0.2;
  s.b *= 1 - 0.08 * blotch - fleck * 0.22;
  s.gloss = 0.035;
  s.sharpness = 15 + 8 * blotch;
  s.scatter = 1;
}

/** An eye whose texture place is the unit sphere, looking along +w. @param {import('./materials.mjs').Sample} s */
export function eyeColour(s) {
  const away = Math.hypot(s.u, s.v);
  const angle = Math.atan2(s.v, s.u);
  const ahead = s.w > 0 ? 1 : 0;
  const rays = fbm2(angle * 5.1, away * 6, 3) * 0.8 + noise2(angle * 24, away * 2) * 0.3;
  const iris = smoothStep(0.5, 0.46, away) * ahead;
  const limbus = smoothStep(0.35, 0.5, away);
  const vein = smoothStep(0.1, 0, Math.abs(noise2(s.u * 5 + 4, s.v * 7))) * smoothStep(0.5, 0.95, away);
  const white = [0.5 + 0.02 * vein, 0.45 - 0.17 * vein, 0.41 - 0.17 * vein];
  const hazel = [0.14 + 0.07 * rays, 0.13 + 0.06 * rays, 0.08 + 0.03 * rays];
  const pupil = smoothStep(0.2, 0.17, away) * ahead;
  const tone = [0, 1, 2].map((c) => mix(mix(white[c], hazel[c] * (1 - limbus * 0.75), iris), 0.004, pupil));
  [s.r, s.g, s.b] = tone;
  s.gloss = 0.05;
  s.sharpness = 700;
}

/** @param {import('./materials.mjs').Sample} s */
export function hairColour(s) {
  const strand = 0.8 + 0.35 * noise2(s.w * 91.7, s.u * 12);
  s.r *= strand;
  s.g *= strand;
  s.b *= strand;
  s.gloss = 0.06;
  s.sharpness = 22;
  s.through = 0.25;
}

/** u along the shaft in metres, v −1…1 across. @param {import('./materials.mjs').Sample} s */
export function featherColour(s) {
  const fp = s.footprint;
  const barbs = noise2((s.u + Math.abs(s.v) * 0.012) * 900, s.w * 31) * smoothStep(0.0022, 0.0006, fp);
  const shaft = smoothStep(0.12, 0.04, Math.abs(s.v)) * smoothStep(0.004, 0.001, fp);
  const k =
    0.92 +
    0.22 * barbs +
    0.25 * fbm2(s.u * 30, s.v * 3 + s.w * 17, 3, fp * 30) +
    0.2 * shaft -
    0.22 * smoothStep(0.55, 1, Math.abs(s.v));
  s.r *= k;
  s.g *= k;
  s.b *= k;
  s.through = 0.25;
  s.gloss = 0.02;
  s.sharpness = 14;
}
