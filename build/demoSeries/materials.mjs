// What each surface looks like close to: its relief (for bumps) and its colour and sheen. Texture places
// are in metres, so the grain keeps its size whatever the object; detail below a pixel fades out.

import {
  clothColour,
  clothRelief,
  eyeColour,
  featherColour,
  hairColour,
  knitRelief,
  skinColour,
  skinRelief,
} from './clothAndSkin.mjs';
import { cellValue, fbm2, fbm3, mix, noise2, noise3, smoothStep } from './seededNoise.mjs';
import { paintColour, postColour, ropeColour, ropeRelief, woodColour, woodRelief } from './timberAndRope.mjs';

/** Material numbers, kept per triangle. */
export const material = {
  plain: 1,
  water: 2,
  mud: 3,
  meadow: 4,
  blade: 5,
  leaf: 6,
  bark: 7,
  wood: 8,
  post: 9,
  paint: 10,
  sign: 11,
  cloth: 12,
  knit: 13,
  skin: 14,
  hair: 15,
  eye: 16,
  rope: 17,
  stone: 18,
  tile: 19,
  plaster: 20,
  glass: 21,
  iron: 22,
  feather: 23,
  felt: 24,
  forest: 25,
  pebble: 26,
  deck: 27,
};

/**
 * @typedef {object} Sample what the shader hands over and gets back
 * @property {number} px @property {number} py @property {number} pz place in the world
 * @property {number} u @property {number} v @property {number} w texture place
 * @property {number} footprint size of a pixel there, metres
 * @property {number} r @property {number} g @property {number} b colour, in: the vertex colour
 * @property {number} gloss mirror share face on @property {number} sharpness exponent of the highlight
 * @property {number} through light let through @property {number} scatter light under the skin
 * @property {number} openness sky seen
 */

const m = material;

/** Lit from both sides. */
export const isThin = new Uint8Array(64);
for (const id of [m.blade, m.leaf, m.cloth, m.feather, m.hair, m.rope]) isThin[id] = 1;
/** Throws a shadow. */
export const castsShadow = (id) => id !== m.water && id !== m.mud && id !== m.meadow && id !== m.forest;
/** Has relief, measured at three places to bend the normal. */
export const hasRelief = new Uint8Array(64);
for (const id of [
  m.mud,
  m.bark,
  m.wood,
  m.post,
  m.paint,
  m.cloth,
  m.knit,
  m.skin,
  m.rope,
  m.stone,
  m.tile,
  m.felt,
  m.forest,
  m.deck,
  m.meadow,
  m.plaster,
])
  hasRelief[id] = 1;

/** Height of the relief in metres. */
export function reliefOf(id, u, v, w, fp) {
  switch (id) {
    case m.wood:
    case m.deck:
      return woodRelief(u, v, w, fp);
    case m.paint:
      return woodRelief(u, v, w, fp) * 0.35 + fbm3(u * 3, v * 3, w * 3, 2, fp * 3) * 0.004;
    case m.post:
      return woodRelief(u, v, w, fp) * 1.5 + fbm3(u * 14, v * 14, w * 14, 3, fp * 14) * 0.006;
    case m.rope:
      return ropeRelief(u, v, fp);
    case m.cloth:
      return clothRelief(u, v, w, fp);
    case m.knit:
      return knitRelief(u, v);
    case m.skin:
      return skinRelief(u, v, w, fp);
    case m.felt:
      return (
        fbm3(u * 160, v * 160, w * 160, 4, fp * 160) * 0.0011 +
        fbm3(u * 18, v * 18, w * 18, 3, fp * 18) * 0.003
      );
    case m.mud:
      return (
        fbm2(u * 1.1, v * 1.1, 3, fp * 1.1) * 0.12 +
        fbm2(u * 7, v * 11, 4, fp * 9) * 0.028 +
        Math.abs(noise2(u * 26, v * 34)) * 0.005 * smoothStep(0.03, 0.008, fp)
      );
    case m.meadow:
      return fbm2(u * 2, v * 2, 4, fp * 2) * 0.12;
    case m.bark:
      return fbm3(u * 4, v * 22, w, 4, fp * 20) * 0.02;
    case m.stone:
      return stoneRelief(u, v, w, fp);
    case m.tile:
      return (
        ((v * 4.2) % 1) * 0.02 +
        Math.abs(((((u * 3.6 + Math.floor(v * 4.2) * 0.5) % 1) + 1) % 1) - 0.5) * -0.03 +
        fbm2(u * 9, v * 9, 2, fp * 9) * 0.006
      );
    case m.plaster:
      return fbm2(u * 6, v * 6, 3, fp * 6) * 0.006;
    case m.forest:
      return forestRelief(u, v, fp);
    default:
      return 0;
  }
}

function forestRelief(u, v, fp) {
  return fbm2(u * 0.11, v * 0.11, 5, fp * 0.11) * 6;
}

function stoneRelief(u, v, w, fp) {
  const row = Math.floor(v * 3.2);
  const fu = ((((u + w) * 2.1 + cellValue(row, 7) * 3) % 1) + 1) % 1;
  const fv = (((v * 3.2) % 1) + 1) % 1;
  const joint = Math.min(
    smoothStep(0, 0.07, fu),
    smoothStep(0, 0.09, fv),
    smoothStep(1, 0.93, fu),
    smoothStep(1, 0.91, fv),
  );
  return joint * 0.018 + fbm3(u * 9, v * 9, w * 9, 4, fp * 9) * 0.02;
}

/** Scales the colour by `k`. */
export function shadeBy(s, k) {
  s.r *= k;
  s.g *= k;
  s.b *= k;
}

/** Moves the colour towards another by `t`. */
export function blendTo(s, r, g, b, t) {
  if (t <= 0) return;
  s.r += (r - s.r) * t;
  s.g += (g - s.g) * t;
  s.b += (b - s.b) * t;
}

/** Fills in colour and sheen for a material. @param {number} id @param {Sample} s */
export function colourOf(id, s) {
  s.gloss = 0.02;
  s.sharpness = 12;
  s.through = 0;
  s.scatter = 0;
  switch (id) {
    case m.wood:
      return woodColour(s);
    case m.deck:
      return deckColour(s);
    case m.post:
      return postColour(s);
    case m.paint:
    case m.sign:
      return paintColour(s);
    case m.rope:
      return ropeColour(s);
    case m.cloth:
      return clothColour(s);
    case m.knit:
      s.gloss = 0;
      return shadeBy(
        s,
        0.75 + 0.3 * fbm3(s.u * 90, s.v * 90, s.w * 90, 3, s.footprint * 90) + knitRelief(s.u, s.v) * 70,
      );
    case m.skin:
      return skinColour(s);
    case m.eye:
      return eyeColour(s);
    case m.hair:
      return hairColour(s);
    case m.feather:
      return featherColour(s);
    case m.felt:
      s.gloss = 0.004;
      return shadeBy(
        s,
        0.85 +
          0.5 * fbm3(s.u * 45, s.v * 45, s.w * 45, 5, s.footprint * 45) +
          0.3 * fbm3(s.u * 7, s.v * 7, s.w * 7, 3),
      );
    case m.mud:
      return mudColour(s);
    case m.meadow:
      return meadowColour(s);
    case m.blade:
      return bladeColour(s);
    case m.leaf:
      s.through = 0.55;
      s.gloss = 0.03;
      s.sharpness = 18;
      return shadeBy(s, 0.85 + 0.3 * noise3(s.px * 3, s.py * 3, s.pz * 3));
    case m.forest:
      return forestColour(s);
    case m.pebble:
      s.gloss = 0.05;
      return shadeBy(s, 0.8 + 0.5 * fbm3(s.px * 60, s.py * 60, s.pz * 60, 3, s.footprint * 60));
    default:
      return builtColour(id, s);
  }
}

function builtColour(id, s) {
  const fp = s.footprint;
  if (id === m.bark) return shadeBy(s, 0.8 + 0.9 * fbm3(s.u * 4, s.v * 22, s.w, 4, fp * 20));
  if (id === m.stone) {
    const relief = stoneRelief(s.u, s.v, s.w, fp);
    const tone = cellValue((s.u + s.w) * 2.1 + cellValue(Math.floor(s.v * 3.2), 7) * 3, s.v * 3.2);
    s.gloss = 0.02;
    shadeBy(s, 0.55 + 0.4 * tone + relief * 14);
    return blendTo(
      s,
      0.05,
      0.06,
      0.03,
      smoothStep(0.1, 0.6, fbm3(s.px * 1.3, s.py * 1.3, s.pz * 1.3, 4)) * 0.6,
    );
  }
  if (id === m.tile) {
    const tone = cellValue(s.u * 3.6 + Math.floor(s.v * 4.2) * 0.5, s.v * 4.2 + 31);
    shadeBy(s, 0.65 + 0.55 * tone + 0.5 * fbm2(s.u * 1.5, s.v * 1.5, 4, fp * 1.5));
    return blendTo(s, 0.12, 0.12, 0.06, smoothStep(0.12, 0.5, fbm2(s.u * 0.8 + 40, s.v * 0.8, 4, fp)) * 0.5);
  }
  if (id === m.plaster) {
    const streak = fbm3(s.px * 1.6, s.py * 0.35, s.pz * 1.6, 4, fp);
    return shadeBy(s, 0.85 + 0.3 * streak - 0.25 * smoothStep(1.2, 0, s.v));
  }
  if (id === m.glass) {
    s.gloss = 0.12;
    s.sharpness = 900;
    return;
  }
  if (id === m.iron) {
    const rust = smoothStep(-0.1, 0.3, fbm3(s.px * 9, s.py * 9, s.pz * 9, 4, fp * 9));
    s.gloss = 0.12 * (1 - rust) + 0.01;
    s.sharpness = 40;
    return blendTo(s, 0.2, 0.085, 0.035, rust * 0.85);
  }
}

/** Boards walked on: paler along the middle, dark between. */
function deckColour(s) {
  woodColour(s);
  shadeBy(s, 0.9 + 0.35 * fbm2(s.px * 0.9, s.pz * 0.9, 4, s.footprint));
  s.gloss = 0.03;
}

function mudColour(s) {
  const fp = s.footprint;
  const broad = fbm2(s.px * 0.35, s.pz * 0.35, 4, fp * 0.35);
  const fine = fbm2(s.px * 8, s.pz * 12, 4, fp * 10);
  const wet = smoothStep(0.85, 0.2, s.py + broad * 0.5 + fine * 0.12);
  const grit = smoothStep(0.25, 0.6, noise2(s.px * 44, s.pz * 44)) * smoothStep(0.03, 0.006, fp);
  shadeBy(s, (0.8 + 0.5 * broad + 0.6 * fine) * mix(1, 0.4, wet));
  blendTo(s, 0.25, 0.22, 0.17, grit * 0.5);
  blendTo(
    s,
    0.07,
    0.085,
    0.025,
    smoothStep(0.12, 0.45, fbm2(s.px * 0.9 + 50, s.pz * 1.4, 5, fp)) * 0.65 * (1 - wet * 0.5),
  );
  s.gloss = 0.03 + wet * 0.1 * smoothStep(-0.3, 0.25, -fine);
  s.sharpness = mix(8, 90, wet);
}

function meadowColour(s) {
  const fp = s.footprint;
  const broad = fbm2(s.px * 0.05, s.pz * 0.05, 4, fp * 0.05);
  const fine = fbm2(s.px * 2.5, s.pz * 2.5, 5, fp * 2.5);
  shadeBy(s, 0.85 + 0.6 * fine + 0.35 * broad);
  blendTo(s, s.r * 1.6, s.g * 1.15, s.b * 0.8, smoothStep(-0.1, 0.4, broad));
  s.gloss = 0;
}

function bladeColour(s) {
  s.through = 0.6;
  s.gloss = 0.04;
  s.sharpness = 25;
  const streak = noise2(s.u * 9 + s.w * 13, s.v * 2 + s.w * 7);
  shadeBy(s, 0.85 + 0.25 * streak - 0.15 * (1 - Math.abs(s.v)) * smoothStep(0.004, 0.001, s.footprint));
}

function forestColour(s) {
  const fp = s.footprint;
  const crown = fbm2(s.u * 0.11, s.v * 0.11, 5, fp * 0.11);
  shadeBy(s, 0.7 + 1.2 * crown);
  blendTo(s, s.r * 1.7, s.g * 1.2, s.b * 0.8, smoothStep(0, 0.5, fbm2(s.u * 0.03, s.v * 0.03, 3)) * 0.7);
  s.gloss = 0;
}
