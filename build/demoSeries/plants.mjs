// Grass, reeds and trees, blade by blade and leaf by leaf.

import { groundHeight } from './banks.mjs';
import { material } from './materials.mjs';
import { Mesh, placing, toned } from './mesh.mjs';
import { fbm2, noise2, randomStream, smoothStep } from './seededNoise.mjs';
import { addRibbon, addTube, curveThrough } from './solids.mjs';

/**
 * One bent blade growing from a foot.
 * @param {Mesh} mesh @param {() => number} next
 */
function addBlade(mesh, next, foot, heightM, lean, leanAngle, halfWidthM, tone, spans = 4) {
  const path = [];
  const [cx, cz] = [Math.cos(leanAngle), Math.sin(leanAngle)];
  for (let i = 0; i <= spans; i++) {
    const t = i / spans;
    const out = lean * heightM * t ** 2.2;
    path.push([foot[0] + cx * out, foot[1] + heightM * t * (1 - 0.35 * lean * t * t), foot[2] + cz * out]);
  }
  const turn = leanAngle + Math.PI / 2 + (next() - 0.5) * 1.4;
  const side = [Math.cos(turn), 0, Math.sin(turn)];
  addRibbon(mesh, path, side, (t) => halfWidthM * (1 - t ** 1.6) + 0.0003, material.blade, {
    seed: next() * 20,
    tint: (t) => [tone.map((c) => c * (0.75 + 0.5 * t)), 0.3 + 0.7 * smoothStep(0, 0.7, t)],
  });
}

const greenGrass = [
  [0.09, 0.13, 0.03],
  [0.14, 0.16, 0.05],
  [0.23, 0.2, 0.08],
  [0.06, 0.1, 0.03],
];
const strawGrass = [
  [0.32, 0.26, 0.13],
  [0.25, 0.2, 0.09],
  [0.16, 0.16, 0.05],
  [0.38, 0.32, 0.18],
];

/**
 * Grass over a stretch of bank. `minHalfWidthM` widens blades that would be finer than a pixel.
 * @param {Mesh} mesh
 * @param {{ seed: number, x0: number, x1: number, z0: number, z1: number, count: number, heightM?: number, eye: number[], pixelAngle: number }} options
 */
export function addGrass(mesh, { seed, x0, x1, z0, z1, count, heightM = 0.45, eye, pixelAngle }) {
  const next = randomStream(seed);
  for (let i = 0; i < count; i++) {
    const x = x0 + (x1 - x0) * next();
    const z = z0 + (z1 - z0) * next();
    const y = groundHeight(x, z);
    const clump = fbm2(x * 0.9, z * 0.9, 3);
    const chance = next();
    if (y < 0.66 + clump * 0.3 || chance < -clump * 1.2) continue;
    const away = Math.hypot(x - eye[0], y - eye[1], z - eye[2]);
    if (away < 0.7) continue;
    const tones = clump > 0.05 ? strawGrass : greenGrass;
    const tone = tones[Math.floor(next() * 4)];
    const tall = heightM * (0.45 + 0.8 * next()) * (1 + clump);
    addBlade(
      mesh,
      next,
      [x, y - 0.02, z],
      tall,
      0.25 + 0.9 * next() * next(),
      next() * 6.28,
      Math.max(0.0035, away * pixelAngle * 0.45),
      tone,
      3,
    );
  }
}

const reedTones = [
  [0.34, 0.27, 0.13],
  [0.27, 0.22, 0.1],
  [0.14, 0.16, 0.05],
  [0.1, 0.14, 0.045],
  [0.42, 0.35, 0.2],
];

/**
 * A stand of reeds: stalks with leaves and plumes.
 * @param {Mesh} mesh
 * @param {{ seed: number, centre: [number, number], radius: [number, number], count: number, heightM?: number, eye: number[], pixelAngle: number, baseY?: (x: number, z: number) => number }} options
 */
export function addReeds(
  mesh,
  { seed, centre, radius, count, heightM = 2.1, eye, pixelAngle, baseY = groundHeight },
) {
  const next = randomStream(seed);
  for (let i = 0; i < count; i++) {
    const angle = next() * Math.PI * 2;
    const r = Math.sqrt(next());
    const x = centre[0] + Math.cos(angle) * r * radius[0];
    const z = centre[1] + Math.sin(angle) * r * radius[1];
    const thin = noise2(x * 1.3 + seed, z * 1.3);
    const tall = heightM * (0.6 + 0.45 * next()) * (0.9 + 0.25 * thin);
    const tone = reedTones[Math.floor(next() * 5)];
    const foot = [x, Math.max(-0.25, baseY(x, z)) - 0.05, z];
    const away = Math.hypot(x - eye[0], z - eye[2]);
    addReed(mesh, next, foot, tall, tone, Math.max(0.0032, away * pixelAngle * 0.5));
  }
}

function addReed(mesh, next, foot, tall, tone, half) {
  const windAngle = 0.4 + (next() - 0.5) * 1.6;
  const lean = 0.05 + 0.16 * next();
  addBlade(mesh, next, foot, tall, lean, windAngle, half, tone, 5);
  const leaves = 2 + Math.floor(next() * 4);
  for (let k = 0; k < leaves; k++) {
    const t = 0.25 + 0.6 * next();
    const out = lean * tall * t ** 2.2;
    const at = [foot[0] + Math.cos(windAngle) * out, foot[1] + tall * t, foot[2] + Math.sin(windAngle) * out];
    const leafTone = toned(tone, 0.75 + 0.5 * next());
    addBlade(
      mesh,
      next,
      at,
      tall * (0.22 + 0.22 * next()),
      0.7 + next() * 0.9,
      windAngle + (next() - 0.5) * 2.6,
      half * (1.5 + next() * 1.4),
      leafTone,
      4,
    );
  }
  if (next() < 0.55)
    addPlume(
      mesh,
      next,
      [
        foot[0] + Math.cos(windAngle) * lean * tall,
        foot[1] + tall * (1 - 0.3 * lean),
        foot[2] + Math.sin(windAngle) * lean * tall,
      ],
      windAngle,
      half,
    );
}

function addPlume(mesh, next, top, windAngle, half) {
  const tone = [0.2 + 0.12 * next(), 0.15 + 0.08 * next(), 0.1 + 0.05 * next()];
  for (let k = 0; k < 14; k++) {
    const drop = next() * 0.22;
    const at = [
      top[0] - Math.cos(windAngle) * drop * 0.3,
      top[1] - drop,
      top[2] - Math.sin(windAngle) * drop * 0.3,
    ];
    addBlade(
      mesh,
      next,
      at,
      0.07 + 0.12 * next(),
      0.8 + next(),
      windAngle + (next() - 0.5) * 1.8,
      half * 0.8,
      tone,
      2,
    );
  }
}

/** A tree with leaves gathered in clumps about its limbs. @returns {Mesh} about 10 m tall */
export function growTree(
  seed,
  {
    leaves = 2600,
    leafM = 0.6,
    tone = [0.07, 0.1, 0.03],
    spread = 3.6,
    tall = 9,
    trunkM = 0.28,
    low = 0.28,
    distant = false,
  } = {},
) {
  const next = randomStream(seed);
  const mesh = new Mesh();
  mesh.colour = [0.13, 0.105, 0.08];
  const limbs = [];
  const trunkTop = [(next() - 0.5) * 0.8, tall * 0.42, (next() - 0.5) * 0.8];
  addTube(
    mesh,
    curveThrough([[0, -0.4, 0], [0.1, tall * 0.2, 0.05], trunkTop], 4),
    (t) => trunkM * (1.25 - 0.75 * t),
    8,
    material.bark,
  );
  const count = 11 + Math.floor(next() * 6);
  for (let i = 0; i < count; i++) {
    const angle = (i / count) * 6.28 + next() * 0.8;
    const rise = tall * (low + (0.95 - low) * next());
    const out = spread * (1 - ((rise / tall - 0.55) / 0.62) ** 2) * (0.35 + 0.6 * next());
    const tip = [trunkTop[0] + Math.cos(angle) * out, rise, trunkTop[2] + Math.sin(angle) * out];
    if (i < 5 && leaves > 200)
      addTube(
        mesh,
        curveThrough(
          [
            [trunkTop[0] * 0.7, trunkTop[1] * (0.6 + 0.4 * next()), trunkTop[2] * 0.7],
            [tip[0] * 0.5, (trunkTop[1] + rise) * 0.52, tip[2] * 0.5],
            tip,
          ],
          3,
        ),
        (t) => trunkM * 0.42 * (1.05 - t) + 0.015,
        5,
        material.bark,
      );
    limbs.push({ tip, r: spread * (0.3 + 0.25 * next()) });
  }
  for (let i = 0; i < leaves; i++)
    addLeaf(mesh, next, limbs[Math.floor(next() * limbs.length)], leafM, tone, tall, distant);
  return mesh;
}

function addLeaf(mesh, next, { tip, r }, leafM, tone, tall, distant) {
  const [a, b] = [next() * 6.28, Math.acos(2 * next() - 1)];
  const n = [Math.sin(b) * Math.cos(a), Math.cos(b), Math.sin(b) * Math.sin(a)];
  const depth = Math.cbrt(0.25 + 0.75 * next());
  const at = [tip[0] + n[0] * r * depth, tip[1] + n[1] * r * depth * 0.75, tip[2] + n[2] * r * depth];
  const size = leafM * (0.6 + 0.7 * next());
  const [ta, tb] = [next() * 6.28, next() * 6.28];
  const u = [Math.cos(ta) * size, (next() - 0.6) * size * 0.8, Math.sin(ta) * size];
  const v = [Math.cos(tb) * size * 0.5, (next() - 0.4) * size * 0.5, Math.sin(tb) * size * 0.5];
  const shift = 0.75 + 0.5 * next();
  mesh.colour = [
    tone[0] * shift * (0.85 + 0.35 * next()),
    tone[1] * shift,
    tone[2] * shift * (0.7 + 0.5 * next()),
  ];
  mesh.openness = Math.max(
    0.16,
    Math.min(1, depth ** 2.5 * (0.62 + 0.38 * n[1]) * (0.55 + (0.5 * at[1]) / tall)),
  );
  const normal = [
    n[0] + (next() - 0.5) * 0.9,
    n[1] + 0.25 + (next() - 0.5) * 0.9,
    n[2] + (next() - 0.5) * 0.9,
  ];
  const put = (s, t) =>
    mesh.vertex(
      at[0] + u[0] * s + v[0] * t,
      at[1] + u[1] * s + v[1] * t,
      at[2] + u[2] * s + v[2] * t,
      normal[0],
      normal[1],
      normal[2],
      s,
      t,
      0,
    );
  if (distant) mesh.triangle(put(-0.6, -0.3), put(0.7, -0.1), put(-0.1, 0.7), material.leaf);
  else mesh.quad(put(-0.5, 0), put(0.05, -0.5), put(0.6, 0), put(0.05, 0.5), material.leaf);
  mesh.openness = 1;
}

/** Trees standing in given places. @param {Mesh} mesh @param {[number, number, number][]} places x, z, scale */
export function addTrees(mesh, places, seed, kinds, sees) {
  const next = randomStream(seed);
  for (const [x, z, scale] of places) {
    const kind = kinds[Math.floor(next() * kinds.length)];
    const tint = 0.75 + 0.5 * next();
    const [yaw, size, warm] = [
      next() * 6.28,
      scale * (0.85 + 0.3 * next()),
      tint * (0.9 + 0.5 * next() ** 2),
    ];
    if (sees(x, z)) mesh.add(kind, placing([x, groundHeight(x, z), z], yaw, size), [warm, tint, tint]);
  }
}
