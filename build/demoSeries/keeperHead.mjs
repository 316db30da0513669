// Odalys Brook's head: a modelled face, eyes, brows, hair and a felt hat. Its own axes in metres:
// x to her left, y up, z out of the face, the middle of the head at the origin.

import { material } from './materials.mjs';
import { Mesh } from './mesh.mjs';
import { ball, blend, carve, egg, meshOfSurface, rod } from './roundedShapes.mjs';
import { fbm3, noise2, noise3, randomStream, smoothStep } from './seededNoise.mjs';
import { addRibbon, addTurned, curveThrough } from './solids.mjs';

const cm = 0.01;

/** Lines and hollows of the face as seen from the front: from, to, width, depth (cm). */
const creases = [
  [[-0.1, -6.08], [1.3, -6.12], 0.13, 0.3],
  [[1.3, -6.12], [2.4, -5.82], 0.12, 0.13],
  [[1.75, -3], [2.75, -4.5], 0.34, 0.16],
  [[2.75, -4.5], [3.1, -6.2], 0.36, 0.12],
  [[0, -4.1], [0, -4.9], 0.2, 0.1],
  [[0, -7.75], [1.3, -7.55], 0.5, 0.2],
  [[1.7, -0.35], [3.2, -0.75], 0.2, 0.09],
  [[3.2, -0.75], [4.6, -0.45], 0.2, 0.07],
  [[1.6, 1.8], [3.2, 2.2], 0.16, 0.06],
  [[3.2, 2.2], [4.8, 1.6], 0.16, 0.05],
  [[4.9, 0.9], [6, 1.3], 0.09, 0.06],
  [[4.9, 0.6], [6.1, 0.4], 0.09, 0.06],
  [[4.8, 0.3], [5.8, -0.4], 0.09, 0.05],
  [[0.5, 3.3], [0.42, 2.2], 0.14, 0.08],
  [[0, 4.9], [3.6, 5], 0.12, 0.05],
  [[0, 5.7], [3.9, 5.9], 0.12, 0.05],
];

function creaseDepth(x, y, z) {
  if (z < 2.5) return 0;
  let depth = 0;
  for (const [a, b, width, deep] of creases) {
    const bx = b[0] - a[0];
    const by = b[1] - a[1];
    let t = ((x - a[0]) * bx + (y - a[1]) * by) / (bx * bx + by * by);
    t = t < 0 ? 0 : t > 1 ? 1 : t;
    const away = ((x - a[0] - bx * t) ** 2 + (y - a[1] - by * t) ** 2) / (width * width);
    if (away < 6) depth += deep * Math.exp(-away);
  }
  return depth;
}

/** Distance to the skin, in centimetres; the face is the same on both sides but for a slight leaning. */
function faceDistance(px, y, z) {
  const x = Math.abs(px + 0.08 * noise2(y * 0.2, z * 0.2));
  let d = egg(x, y, z, 0, 3.2, -1.2, 7.2, 9.4, 9.4);
  d = blend(d, egg(x, y, z, 0, -4, 2, 5.35, 7.6, 6.2), 3);
  d = blend(d, egg(x, y, z, 0, -9.6, 5.6, 2.1, 1.9, 2), 2.6);
  d = blend(d, rod(x, y, z, [5.3, -5, 0], [1.6, -9.6, 4.8], 1.2, 1.1), 2.4);
  d = blend(d, egg(x, y, z, 4, -1.9, 5.5, 2.2, 1.8, 2), 2.2);
  d = blend(d, rod(x, y, z, [0.9, 2.75, 7.4], [4.7, 2.8, 5.3], 0.85, 0.8), 1.6);
  d = carve(d, egg(x, y, z, 3.15, 0.95, 8.6, 2.05, 1.3, 2), 1.3);
  d = blend(d, rod(x, y, z, [0, 2.3, 7.6], [0, -2.3, 9.8], 0.55, 0.72), 1.25);
  d = blend(d, ball(x, y, z, 0, -2.55, 9.55, 1), 0.7);
  d = blend(d, egg(x, y, z, 1.08, -2.8, 8.8, 0.68, 0.66, 1), 0.55);
  d = carve(d, egg(x, y, z, 0.58, -3.4, 9.3, 0.3, 0.26, 0.5), 0.3);
  d = blend(d, egg(x, y, z, 0, -5.6, 7, 2.8, 1.9, 1.7), 1.6);
  d = blend(d, rod(x, y, z, [0.25, -5.5, 8.6], [2.25, -5.72, 7.4], 0.52, 0.2), 0.5);
  d = blend(d, rod(x, y, z, [0, -6.7, 8.45], [1.9, -6.1, 7.5], 0.66, 0.25), 0.55);
  d = blend(d, lids(x, y, z), 0.28);
  d = blend(d, rod(x, y, z, [0, -8, -2.6], [0.2, -20, -3.8], 4.6, 5.2), 2.6);
  d += creaseDepth(x, y, z) + 0.05 * noise3(px * 0.9, y * 0.9, z * 0.9);
  return blend(d, ear(x, y, z), 0.5);
}

/** Upper and lower lid: a shell about the eyeball, open along a slit. */
function lids(x, y, z) {
  const px = x - 3.15;
  const py = y - 0.95;
  const shell = Math.abs(Math.sqrt(px * px + py * py + (z - 6.55) ** 2) - 1.4) - 0.2;
  const bow = 1 - (px / 1.5) ** 2;
  const top = 0.06 + 0.27 * Math.max(-0.3, bow) + 0.05 * px;
  const bottom = -0.16 - 0.27 * Math.max(-0.3, bow) + 0.05 * px;
  const slit = Math.max(py - top, bottom - py);
  return Math.max(Math.max(shell, -slit), -(z - 5.9));
}

function ear(x, y, z) {
  const shell = egg(x, y, z, 7.3, -0.2, -1.4, 0.85, 3.1, 1.9);
  return carve(shell, egg(x, y, z, 8.2, 0.1, -0.9, 0.7, 2, 1.1), 0.5);
}

const skinTone = [0.43, 0.265, 0.19];

/** Colour of the skin by place: lips, flushed cheeks and nose, darker about the eyes. */
function dressSkin(px, py, pz, mesh) {
  const [x, y, z] = [Math.abs(px) / cm, py / cm, pz / cm];
  const lip = smoothStep(
    0.75,
    0.25,
    Math.min(
      rod(x, y, z, [0, -5.55, 8.9], [2.2, -5.8, 7.5], 0.22, 0.03),
      rod(x, y, z, [0, -6.65, 8.8], [1.9, -6.2, 7.6], 0.35, 0.05),
    ) * 1.6,
  );
  const flush =
    smoothStep(3.4, 0.6, ball(x, y, z, 4.2, -2.2, 6.8, 0.8)) * 0.65 +
    smoothStep(1.7, 0.2, ball(x, y, z, 0, -2.7, 10, 0.7)) * 0.6;
  const hollow = smoothStep(1.5, 0.1, egg(x, y, z, 3.15, 0.6, 7.4, 1.5, 1, 1)) * 0.75;
  const rim =
    smoothStep(0.32, 0.05, Math.abs(ball(x, y, z, 3.15, 0.95, 6.55, 1.4))) *
    smoothStep(1, 0.4, Math.abs(y - 0.9)) *
    (z > 6.9 ? 1 : 0);
  const crease = smoothStep(0.34, 0.06, rod(x, y, z, [0, -6.08, 9], [2.4, -5.85, 7.6], 0.02, 0.02));
  const mottle = fbm3(x * 0.7, y * 0.7, z * 0.7, 4);
  const weather = 1 + 0.12 * mottle;
  let r = skinTone[0] * weather;
  let g = skinTone[1] * weather * (1 - 0.08 * mottle);
  let b = skinTone[2] * weather * (1 - 0.1 * mottle);
  const toward = (tr, tg, tb, t) => {
    r += (tr - r) * t;
    g += (tg - g) * t;
    b += (tb - b) * t;
  };
  toward(0.5, 0.19, 0.135, flush * 0.55);
  toward(0.25, 0.115, 0.085, hollow * 0.6);
  toward(0.33, 0.1, 0.085, lip * 0.75);
  toward(0.2, 0.075, 0.055, rim * 0.6);
  toward(0.08, 0.02, 0.018, crease * 0.85);
  mesh.colour = [r, g, b];
  mesh.openness = 1 - 0.35 * hollow - 0.5 * crease - 0.45 * smoothStep(-10.5, -14, y) * (z > -1 ? 1 : 0.6);
}

function addEyes(mesh) {
  for (const side of [-1, 1]) {
    const gaze = [0.1, -0.02];
    const part = new Mesh();
    addTurned(
      part,
      Array.from({ length: 15 }, (_, i) => [
        Math.sin((i / 14) * Math.PI) + 1e-4,
        -Math.cos((i / 14) * Math.PI),
      ]),
      24,
      material.eye,
    );
    for (let i = 0; i < part.vertexCount; i++) {
      const v = part.vertices.subarray(i * 13, i * 13 + 13);
      const [x, y, z] = [v[0], v[1], v[2]];
      const bulge = z > 0 && Math.hypot(x - gaze[0], y - gaze[1]) < 0.5 ? 0.05 : 0;
      v[6] = x - gaze[0] * Math.max(0, z);
      v[7] = y - gaze[1] * Math.max(0, z);
      v[8] = z;
      v.set([(side * 3.15 + x * 1.22) * cm, (0.95 + y * 1.22) * cm, (6.55 + (z + bulge) * 1.22) * cm]);
    }
    part.openness = 1;
    mesh.add(part);
  }
}

/** Fine hairs set along the brow and the lids. */
function addBrows(mesh, next, across) {
  for (const side of [-1, 1]) {
    for (let i = 0; i < 420; i++) {
      const t = next();
      const x = 1.1 + 3.9 * t;
      const y =
        2.45 +
        0.62 * Math.sin(Math.min(1, t * 1.25) * Math.PI * 0.62) -
        0.9 * Math.max(0, t - 0.6) +
        (next() - 0.5) * (0.85 - 0.45 * t);
      const z = frontOf(x, y) + 0.02;
      const sweep = [0.55 + 0.3 * next(), 0.35 - 0.7 * t + 0.3 * next(), 0.12];
      const length = 0.55 + 0.4 * next();
      const grey = next() < 0.45 ? 0.3 : 0.11;
      mesh.colour = [grey * 1.1, grey * 0.95, grey * 0.8];
      const path = [0, 0.5, 1].map((s) => [
        side * (x + sweep[0] * length * s) * cm,
        (y + sweep[1] * length * s - 0.1 * s * s) * cm,
        (z + 0.12 * s - 0.12 * s * s * (1 + t)) * cm,
      ]);
      addRibbon(
        mesh,
        path,
        [0.2 * side, 0.95, 0.2],
        (s) => Math.max(across * 0.4, 0.00022) * (1 - s * 0.7),
        material.hair,
        { seed: next() * 9 },
      );
    }
    for (let i = 0; i < 60; i++) {
      const px = -1.25 + (2.5 * i) / 59;
      const y = 0.95 + 0.1 + 0.3 * (1 - (px / 1.5) ** 2);
      const z = 6.55 + Math.sqrt(Math.max(0.05, 1.5 * 1.5 - px * px - 0.2));
      mesh.colour = [0.02, 0.016, 0.013];
      const path = [0, 0.5, 1].map((s) => [
        side * (3.15 + px * (1 + 0.25 * s)) * cm,
        (y + 0.1 * s + 0.2 * s * s) * cm,
        (z + 0.42 * s) * cm,
      ]);
      addRibbon(mesh, path, [1, 0, 0], (s) => Math.max(across * 0.35, 0.00018) * (1.1 - s), material.hair, {
        seed: i,
      });
    }
  }
}

/** Where the face's front lies above (x, y), centimetres. */
function frontOf(x, y) {
  let z = 13;
  for (let i = 0; i < 60; i++) {
    const d = faceDistance(x, y, z);
    if (d < 0.01) break;
    z -= Math.max(0.02, d * 0.7);
  }
  return z;
}

/** Grey-brown hair drawn back under the hat, loose strands about the ears and nape. */
function addHair(mesh, next, across) {
  const count = Math.round(Math.min(7600, 2.4 / across));
  for (let i = 0; i < count; i++) {
    const side = next() < 0.5 ? -1 : 1;
    const t = next();
    const angle = 0.72 + t * 2.2;
    const start = [
      side * 7.75 * Math.sin(angle) * (1 + 0.03 * next()),
      4.6 - 1.4 * t + next() * 1.2,
      8.7 * Math.cos(angle) - 0.6,
    ];
    const loose = next() < 0.12 ? 1 : 0;
    const drop = 7 + 5 * t + next() * 4 + loose * 3;
    const back = [side * (8.35 - 1.5 * t + 0.3 * next()), start[1] - drop * 0.45, start[2] - 2.2 - 0.5 * t];
    const end = [
      side * (5.6 - 2 * t + next() * 1.2 + loose * 2.4 * next()),
      start[1] - drop,
      -5.4 - next() * 3.4 + loose * 3.5 * next(),
    ];
    const wave = noise2(i * 0.37, 2) * 0.5;
    const path = curveThrough(
      [
        start,
        back,
        [(back[0] + end[0]) / 2 + side * (0.5 + wave), (back[1] + end[1]) / 2, (back[2] + end[2]) / 2 + wave],
        end,
      ],
      3,
    );
    const tone = next();
    mesh.colour = tone < 0.4 ? [0.3, 0.27, 0.24] : tone < 0.75 ? [0.15, 0.115, 0.085] : [0.42, 0.4, 0.37];
    mesh.openness = 0.5 + 0.5 * next();
    addRibbon(
      mesh,
      path.map((p) => p.map((c) => c * cm)),
      [0.25 * side, 0.1, 0.96],
      (s) => Math.max(across * 0.45, 0.0004) * (1.1 - 0.6 * s),
      material.hair,
      { seed: i * 0.37 },
    );
  }
  mesh.openness = 1;
}

/** A felt hat that has been rained on: soft crown, uneven brim. */
function addHat(mesh) {
  mesh.colour = [0.085, 0.082, 0.06];
  const tilt = (p) => [p[0], p[1] + p[2] * 0.1 + 0.051, p[2] - 0.012];
  const brim = [
    [0.0845, 0],
    [0.1, -0.004],
    [0.118, -0.008],
    [0.135, -0.012],
    [0.146, -0.0125],
    [0.148, -0.01],
    [0.146, -0.0075],
    [0.12, -0.002],
    [0.1, 0.002],
    [0.087, 0.006],
  ];
  addTurned(mesh, brim, 96, material.felt, (p, a) => {
    const out = (Math.hypot(p[0], p[2]) - 0.084) / 0.064;
    const dip =
      out * (0.012 * Math.sin(a * 2 + 0.6) + 0.007 * Math.sin(a * 3 + 2) + 0.004 * noise2(a * 3, 1));
    return tilt([p[0] * 0.98, p[1] + dip, p[2] * 1.13]);
  });
  const crown = [
    [0.088, 0],
    [0.089, 0.02],
    [0.088, 0.045],
    [0.083, 0.07],
    [0.072, 0.087],
    [0.05, 0.095],
    [0.025, 0.092],
    [0.001, 0.089],
  ];
  addTurned(mesh, crown, 72, material.felt, (p, a) => {
    const high = p[1] / 0.09;
    const dent = high > 0.5 ? 0.012 * high * Math.exp(-((p[0] / 0.03) ** 2)) : 0;
    const soft = 1 + 0.035 * Math.sin(a * 2 + 1) * high + 0.03 * noise3(p[0] * 20, p[1] * 20, p[2] * 20);
    return tilt([p[0] * soft * 0.98, p[1] - dent, p[2] * soft * 1.13]);
  });
  mesh.colour = [0.16, 0.05, 0.035];
  addTurned(
    mesh,
    [
      [0.0895, 0.003],
      [0.0915, 0.006],
      [0.0912, 0.02],
      [0.09, 0.024],
    ],
    72,
    material.cloth,
    (p) => tilt([p[0] * 0.99, p[1], p[2] * 1.14]),
  );
}

/** @param {number} stepM fineness of the skin's mesh @param {number} pixelM size of a pixel at her distance */
export function buildHead(stepM, pixelM) {
  const mesh = new Mesh();
  const next = randomStream(501);
  mesh.add(
    meshOfSurface(
      (x, y, z) => faceDistance(x / cm, y / cm, z / cm) * cm,
      [-0.1, -0.2, -0.12],
      [0.1, 0.14, 0.125],
      stepM,
      material.skin,
      dressSkin,
    ),
  );
  mesh.openness = 1;
  addEyes(mesh);
  addBrows(mesh, next, pixelM);
  addHair(mesh, next, pixelM);
  addHat(mesh);
  return mesh;
}
