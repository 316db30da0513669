// A grey heron, standing. Its own axes in metres: x ahead (the way it looks), y up, feet at y = 0.

import { material } from './materials.mjs';
import { Mesh, toned } from './mesh.mjs';
import { blend, egg, meshOfSurface, rod } from './roundedShapes.mjs';
import { fbm3, noise2, randomStream, smoothStep } from './seededNoise.mjs';
import { addRibbon, addTube, addTurned, curveThrough } from './solids.mjs';

const neck = [
  [0.16, 0.72, 0],
  [0.235, 0.79, 0],
  [0.225, 0.87, 0],
  [0.165, 0.945, 0],
  [0.16, 1.02, 0],
  [0.2, 1.075, 0],
  [0.235, 1.09, 0],
];
const neckCurve = curveThrough(neck, 5);

function bodyDistance(x, y, z) {
  const [c, s] = [Math.cos(0.62), Math.sin(0.62)];
  const bx = (x + 0.02) * c + (y - 0.62) * s;
  const by = -(x + 0.02) * s + (y - 0.62) * c;
  let d = egg(bx, by, z, 0, 0, 0, 0.25, 0.115, 0.1);
  for (let i = 0; i < neckCurve.length - 1; i++) {
    const t = i / neckCurve.length;
    const r = 0.062 * (1 - t) ** 2 + 0.024;
    d = blend(d, rod(x, y, z, neckCurve[i], neckCurve[i + 1], r, 0.062 * (1 - t - 0.03) ** 2 + 0.024), 0.012);
  }
  d = blend(d, egg(x, y, z, 0.262, 1.1, 0, 0.052, 0.03, 0.026), 0.02);
  d = blend(d, rod(x, y, z, [0.28, 1.097, 0], [0.35, 1.085, 0], 0.019, 0.012), 0.012);
  return d + 0.003 * fbm3(x * 40, y * 22, z * 40, 3);
}

function dressBody(x, y, z, mesh) {
  const nape = smoothStep(0.0, -0.03, x - neckX(y));
  const front =
    smoothStep(0.012, 0.03, x - neckX(y)) * smoothStep(0.014, 0.004, Math.abs(z)) * (y > 0.72 ? 1 : 0);
  const dash = front * smoothStep(0.1, 0.3, noise2(y * 55, 3) + 0.2);
  let tone = [0.56, 0.56, 0.55];
  if (y < 0.74) tone = [0.27, 0.3, 0.34];
  const k = y > 0.74 ? 1 - 0.3 * nape : 1;
  const crest =
    y > 1.085 && Math.abs(z) > 0.007 && x < 0.3
      ? smoothStep(0.006, 0.013, Math.abs(z) + (y - 1.1) * 0.25) * smoothStep(1.1, 1.112, y)
      : 0;
  mesh.colour = tone.map((c, i) => c * k * (1 - 0.9 * dash) * (1 - 0.93 * crest) * (i === 2 ? 1.02 : 1));
  mesh.openness = 0.62 + 0.38 * smoothStep(0.42, 0.7, y);
}

function neckX(y) {
  let best = neckCurve[0];
  for (const p of neckCurve) if (Math.abs(p[1] - y) < Math.abs(best[1] - y)) best = p;
  return best[0];
}

/** Rows of feathers lying over the folded wing, and the dark quills below. */
function addWing(mesh, next, side, pixelM) {
  for (let row = 0; row < 9; row++) {
    const count = 10 + row;
    for (let i = 0; i < count; i++) {
      const t = (i + 0.5 * (row % 2)) / count;
      const start = [
        0.15 - 0.3 * (row / 9) - 0.05 * t + 0.01 * next(),
        0.76 - 0.3 * (row / 9) * 0.62 - 0.2 * t * (1 - row * 0.035) + 0.01 * next(),
      ];
      const out =
        0.096 * Math.sqrt(Math.max(0.05, 1 - ((t - 0.42) / 0.75) ** 2)) + 0.004 + 0.0014 * (9 - row);
      const long = 0.075 + 0.016 * row;
      const path = [0, 0.35, 0.7, 1].map((s) => [
        start[0] - long * 0.8 * s,
        start[1] - long * 0.62 * s,
        side * (out - 0.022 * s * s + 0.005 * Math.sin(s * 3)),
      ]);
      const quill = row > 5 && t > 0.5;
      const tone = quill ? [0.045, 0.05, 0.06] : toned([0.27, 0.31, 0.36], 0.85 + 0.3 * next() - 0.02 * row);
      addRibbon(
        mesh,
        path,
        [0.58, -0.78, side * 0.25],
        (s) =>
          (0.019 + 0.001 * row) * Math.sqrt(Math.max(0, Math.sin(Math.min(1, s * 0.8 + 0.2) * Math.PI))) +
          0.001,
        material.feather,
        {
          seed: next() * 20,
          tint: (s) => [tone.map((c) => c * (1 + 0.25 * smoothStep(0.6, 1, s))), 0.75 + 0.25 * s],
        },
      );
    }
  }
  for (let i = 0; i < 60; i++)
    addPlumeStrand(
      mesh,
      next,
      [-0.02 + 0.16 * next(), 0.74 - 0.05 * next(), side * 0.075 * next()],
      [-0.62, -0.75, side * 0.1],
      0.16 + 0.16 * next(),
      [0.5, 0.53, 0.56],
      pixelM,
    );
}

function addPlumeStrand(mesh, next, start, towards, long, tone, pixelM) {
  const path = [0, 0.33, 0.66, 1].map((s) =>
    [0, 1, 2].map(
      (axis) =>
        start[axis] +
        towards[axis] * long * s +
        (axis === 1 ? -0.03 * s * s : 0.006 * Math.sin(s * 5 + next())),
    ),
  );
  const shade = 0.8 + 0.4 * next();
  mesh.colour = tone.map((c) => c * shade);
  addRibbon(
    mesh,
    path,
    [0.3, 0.3, 0.9],
    (s) => Math.max(pixelM * 0.45, 0.0016) * (1.1 - s),
    material.feather,
    { seed: next() * 9 },
  );
}

function addHeadParts(mesh, next, pixelM) {
  mesh.colour = [0.5, 0.3, 0.06];
  addTube(
    mesh,
    curveThrough(
      [
        [0.325, 1.094, 0],
        [0.38, 1.086, 0],
        [0.435, 1.075, 0],
        [0.465, 1.068, 0],
      ],
      4,
    ),
    (t) => 0.0105 * (1 - t) + 0.0008,
    12,
    material.glass,
  );
  mesh.colour = [0.42, 0.22, 0.05];
  addTube(
    mesh,
    curveThrough(
      [
        [0.32, 1.083, 0],
        [0.38, 1.077, 0],
        [0.43, 1.07, 0],
        [0.46, 1.066, 0],
      ],
      4,
    ),
    (t) => 0.0085 * (1 - t) + 0.0008,
    12,
    material.glass,
  );
  for (const side of [-1, 1]) {
    const eye = new Mesh();
    eye.colour = [0.6, 0.42, 0.03];
    addTurned(
      eye,
      [
        [0.0001, -0.004],
        [0.0065, -0.001],
        [0.0065, 0.001],
        [0.0045, 0.003],
        [0.0001, 0.0042],
      ],
      14,
      material.plain,
    );
    mesh.add(eye, { m: [1, 0, 0, 0, 0, 1, 0, side, 0], t: [0.292, 1.1, side * 0.0225] });
    const pupil = new Mesh();
    pupil.colour = [0.004, 0.004, 0.004];
    addTurned(
      pupil,
      [
        [0.0001, 0],
        [0.0034, 0.0032],
        [0.0001, 0.0046],
      ],
      12,
      material.glass,
    );
    mesh.add(pupil, { m: [1, 0, 0, 0, 0, 1, 0, side, 0], t: [0.292, 1.1, side * 0.0228] });
    addPlumeStrand(
      mesh,
      next,
      [0.235, 1.112, side * 0.014],
      [-0.93, -0.3, side * 0.1],
      0.14,
      [0.02, 0.02, 0.024],
      pixelM * 1.6,
    );
    addPlumeStrand(
      mesh,
      next,
      [0.23, 1.107, side * 0.016],
      [-0.95, -0.24, side * 0.12],
      0.1,
      [0.02, 0.02, 0.024],
      pixelM * 1.6,
    );
  }
  for (let i = 0; i < 46; i++)
    addPlumeStrand(
      mesh,
      next,
      [0.235 - 0.03 * next(), 0.8 - 0.06 * next(), (next() - 0.5) * 0.06],
      [0.1, -0.95, (next() - 0.5) * 0.3],
      0.1 + 0.13 * next(),
      [0.62, 0.62, 0.6],
      pixelM,
    );
}

/** @param {number} pixelM size of a pixel at its distance @returns {Mesh} */
export function buildHeron(pixelM) {
  const mesh = new Mesh();
  const next = randomStream(601);
  mesh.add(
    meshOfSurface(bodyDistance, [-0.27, 0.38, -0.14], [0.38, 1.16, 0.14], 0.0055, material.felt, dressBody),
  );
  for (const side of [-1, 1]) addWing(mesh, next, side, pixelM);
  addHeadParts(mesh, next, pixelM);
  for (let i = 0; i < 13; i++) {
    const z = (i / 12 - 0.5) * 0.07;
    mesh.colour = [0.24, 0.27, 0.31];
    addRibbon(
      mesh,
      [
        [-0.14, 0.52, z],
        [-0.2, 0.45, z],
        [-0.255, 0.38, z * 1.1],
      ],
      [0, 0, 1],
      (s) => 0.012 * (1 - s * 0.5),
      material.feather,
      { seed: i },
    );
  }
  for (const side of [-1, 1]) {
    mesh.colour = [0.34, 0.35, 0.36];
    addTube(
      mesh,
      [
        [0.02, 0.54, side * 0.04],
        [0.015, 0.42, side * 0.04],
      ],
      (t) => 0.034 * (1 - t) + 0.009,
      12,
      material.felt,
    );
    mesh.colour = [0.2, 0.17, 0.09];
    addTube(
      mesh,
      curveThrough(
        [
          [0.015, 0.43, side * 0.04],
          [-0.012 + side * 0.02, 0.25, side * 0.042],
          [0.005 + side * 0.03, -0.35, side * 0.045],
        ],
        6,
      ),
      (t) => 0.0075 + 0.004 * Math.exp(-(((t - 0.5) / 0.06) ** 2)),
      10,
      material.post,
    );
  }
  return mesh;
}
