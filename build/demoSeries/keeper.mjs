// Odalys Brook, the ferry's keeper: head and shoulders for her portrait, a standing figure for the wide
// plates, and her hands on the mooring rope.

import { buildHead } from './keeperHead.mjs';
import { material } from './materials.mjs';
import { Mesh, placing } from './mesh.mjs';
import { ball, blend, egg, meshOfSurface, rod } from './roundedShapes.mjs';
import { fbm3, noise2, noise3, smoothStep } from './seededNoise.mjs';
import { addSheet, addTube, curveThrough } from './solids.mjs';

const coatTone = [0.055, 0.075, 0.085];

/** Folds of heavy cloth, metres. */
function folds(x, y, z) {
  const pull = Math.sin(y * 22 + Math.abs(x) * 26 + noise3(x * 6, y * 5, z * 6) * 3.2) * 0.5 + 0.5;
  const drag = Math.max(0, 1 - Math.abs(noise3(x * 5 + y * 4, y * 3.2 - x * 5, z * 4) * 3.4));
  return (
    -0.005 * drag +
    0.012 * pull ** 2 * (0.4 + 0.6 * noise3(x * 3.1, y * 3.7, z * 3)) +
    0.012 * fbm3(x * 7, y * 4, z * 7, 3)
  );
}

/** Shoulders and chest below the head, whose middle is the origin. */
function bustDistance(x, y, z) {
  const px = Math.abs(x);
  let d = egg(px, y, z, 0, -0.46, -0.045, 0.215, 0.27, 0.125);
  d = blend(d, rod(px, y, z, [0.04, -0.235, -0.05], [0.19, -0.29, -0.05], 0.075, 0.085), 0.1);
  d = blend(d, rod(px, y, z, [0.205, -0.3, -0.05], [0.255, -0.62, -0.02], 0.085, 0.075), 0.05);
  return d + folds(x, y, z);
}

function addCollar(mesh) {
  mesh.colour = coatTone.map((c) => c * 1.1);
  for (const side of [-1, 1])
    addSheet(
      mesh,
      40,
      14,
      (s, t) => {
        const a = side * (0.42 + s * 2.75);
        const r = 0.1 + 0.045 * t + 0.008 * noise2(s * 6, side);
        const y =
          -0.19 +
          0.06 * (1 - s * 0.2) * Math.sin(Math.min(1, t * 1.3) * Math.PI * 0.75) -
          0.085 * t * t -
          0.075 * (1 - s) ** 3;
        return [Math.sin(a) * r * 1.05, y, Math.cos(a) * r * 0.9 - 0.035 + 0.035 * (1 - s) ** 2];
      },
      material.cloth,
      { place: (s, t) => [s * 0.3, t * 0.1, side] },
    );
}

/** A knitted scarf, wound once with an end hanging. */
function addScarf(mesh) {
  mesh.colour = [0.36, 0.2, 0.055];
  for (const [lift, wide, turn] of [
    [-0.155, 0.083, 0.4],
    [-0.183, 0.097, 2.1],
  ]) {
    const path = [];
    for (let i = 0; i <= 60; i++) {
      const a = (i / 60) * Math.PI * 2 + turn;
      path.push([
        Math.sin(a) * wide * 0.92,
        lift + 0.014 * Math.cos(a + 0.8) - 0.02 * Math.max(0, Math.cos(a)),
        Math.cos(a) * wide * 0.88 - 0.025,
      ]);
    }
    addTube(
      mesh,
      path,
      (t, a) => 0.026 * (1 + 0.16 * Math.sin(a * 2 + t * 19) + 0.14 * noise2(t * 22, a * 1.2)),
      36,
      material.knit,
      { capped: false },
    );
  }
  addTube(
    mesh,
    curveThrough(
      [
        [0.02, -0.19, 0.06],
        [0.035, -0.24, 0.098],
        [0.04, -0.36, 0.118],
        [0.045, -0.5, 0.125],
      ],
      10,
    ),
    (t, a) => (0.03 + 0.012 * t) * (0.45 + 0.55 * Math.abs(Math.cos(a))) * (1 + 0.12 * noise2(t * 9, a)),
    30,
    material.knit,
  );
}

/** Head, scarf, coat. The eyes' height is 1 cm over the origin. @returns {Mesh} */
export function buildBust(fineM, pixelM) {
  const mesh = new Mesh();
  mesh.add(buildHead(fineM, pixelM), placing([0, 0, 0], 0.06, 1, 0.03, 0.035));
  const coat = meshOfSurface(
    bustDistance,
    [-0.38, -0.78, -0.24],
    [0.38, -0.13, 0.16],
    fineM * 2.6,
    material.cloth,
    (_x, y, z, part) => {
      part.colour = coatTone;
      part.openness = 0.6 + 0.4 * smoothStep(-0.1, 0.05, z) * smoothStep(-0.2, -0.3, y);
    },
  );
  mesh.add(coat);
  addCollar(mesh);
  addScarf(mesh);
  mesh.colour = [0.12, 0.1, 0.07];
  for (const y of [-0.36, -0.47, -0.58])
    addTube(
      mesh,
      [
        [0.015, y, 0.082],
        [0.015, y, 0.096],
      ],
      0.012,
      20,
      material.plain,
    );
  return mesh;
}

/** A standing figure, feet at the origin, 1.68 m. @returns {Mesh} */
export function buildFigure() {
  const mesh = new Mesh();
  const body = (px, y, z) => {
    const x = Math.abs(px);
    let d = egg(x, y, z, 0, 1.16, 0, 0.2, 0.3, 0.13);
    d = blend(d, egg(x, y, z, 0, 0.82, 0, 0.215, 0.34, 0.16), 0.14);
    d = blend(d, rod(x, y, z, [0.04, 1.4, 0], [0.17, 1.36, 0], 0.07, 0.08), 0.1);
    d = blend(d, rod(px, y, z, [0.2, 1.36, 0], [0.28, 1.08, 0.06], 0.075, 0.06), 0.05);
    d = blend(d, rod(px, y, z, [0.28, 1.08, 0.06], [0.15, 0.98, 0.27], 0.06, 0.05), 0.03);
    d = blend(d, rod(px, y, z, [-0.2, 1.36, 0], [-0.27, 1.07, 0.02], 0.075, 0.06), 0.05);
    d = blend(d, rod(px, y, z, [-0.27, 1.07, 0.02], [-0.22, 0.86, 0.15], 0.06, 0.05), 0.03);
    return d + folds(px, y, z) * 0.8;
  };
  mesh.add(
    meshOfSurface(
      body,
      [-0.42, 0.45, -0.25],
      [0.42, 1.56, 0.36],
      0.016,
      material.cloth,
      (_x, y, _z, part) => {
        part.colour = coatTone;
        part.openness = 0.6 + 0.4 * smoothStep(0.4, 1.2, y);
      },
    ),
  );
  for (const side of [-1, 1]) {
    mesh.colour = [0.05, 0.045, 0.04];
    addTube(
      mesh,
      [
        [side * 0.09, 0.6, 0],
        [side * 0.1, 0.3, 0.01],
        [side * 0.1, 0.05, 0],
      ],
      0.075,
      14,
      material.cloth,
    );
    addTube(
      mesh,
      [
        [side * 0.1, 0.32, 0],
        [side * 0.1, 0.06, 0],
        [side * 0.11, 0.05, 0.1],
      ],
      0.08,
      14,
      material.felt,
    );
    mesh.colour = [0.42, 0.24, 0.16];
    addTube(
      mesh,
      [
        [side * 0.2 - 0.03, 0.95 - (side < 0 ? 0.1 : 0), 0.26 - (side < 0 ? 0.1 : 0)],
        [side * 0.2 - 0.05, 0.93 - (side < 0 ? 0.1 : 0), 0.32 - (side < 0 ? 0.1 : 0)],
      ],
      0.042,
      10,
      material.skin,
    );
  }
  mesh.add(buildHead(0.006, 0.004), placing([0, 1.56, 0.02], 0.3));
  mesh.place = placing([0, 1.56, 0.02], 0);
  addScarf(mesh);
  mesh.place = null;
  return mesh;
}

/**
 * A right hand closed about a bar of radius `grip` along x at the origin, back of the hand up, wrist
 * towards −z; metres.
 */
function handDistance(x, y, z, grip) {
  const r = grip + 0.0085;
  let d = egg(x, y, z, 0.002, grip + 0.012, -0.042, 0.042, 0.0155, 0.046);
  d = blend(
    d,
    rod(x, y, z, [-0.004, grip + 0.006, -0.075], [-0.006, grip - 0.006, -0.15], 0.0245, 0.027),
    0.03,
  );
  d = blend(d, egg(x, y, z, -0.031, grip + 0.001, -0.045, 0.018, 0.018, 0.036), 0.014);
  for (let f = 0; f < 4; f++) {
    const fx = -0.031 + f * 0.0205 + (f === 3 ? -0.0015 : 0);
    const thick = [0.0098, 0.0102, 0.0098, 0.0084][f];
    const knuckle = [
      fx * 0.98,
      grip + 0.0165 - 0.0025 * (f === 3 ? 1.6 : Math.abs(f - 1.2) * 0.8),
      -0.006 - 0.004 * Math.abs(f - 1),
    ];
    let finger = ball(x, y, z, knuckle[0], knuckle[1] - 0.001, knuckle[2], thick * 1.16);
    finger = blend(finger, rod(x, y, z, [fx * 0.9, grip + 0.014, -0.045], knuckle, 0.006, 0.0085), 0.008);
    let from = knuckle;
    const angles = [0.35, -0.15, -0.95, -1.75, -2.35];
    for (let k = 0; k < angles.length; k++) {
      const a = angles[k] + (f === 3 ? 0.12 : 0);
      const to = [
        fx + 0.0012 * k * (f - 1.5) * 0.4,
        Math.sin(a) * r + (k === 0 ? 0.001 : 0),
        Math.cos(a) * r,
      ];
      finger = blend(
        finger,
        rod(x, y, z, from, to, thick * (1 - 0.04 * k), thick * (0.97 - 0.045 * k)),
        0.003,
      );
      if (k === 1) finger = blend(finger, ball(x, y, z, to[0], to[1], to[2], thick * 1.09), 0.004);
      from = to;
    }
    d = blend(d, finger, 0.0045);
  }
  let thumb = rod(x, y, z, [-0.036, grip - 0.001, -0.055], [-0.053, grip * 0.4, -r + 0.004], 0.0145, 0.0115);
  thumb = blend(
    thumb,
    rod(x, y, z, [-0.053, grip * 0.4, -r + 0.004], [-0.043, -grip * 0.9, -r * 0.45], 0.0112, 0.0105),
    0.006,
  );
  thumb = blend(
    thumb,
    rod(x, y, z, [-0.043, -grip * 0.9, -r * 0.45], [-0.028, -r, r * 0.25], 0.0105, 0.0088),
    0.005,
  );
  d = blend(d, thumb, 0.012);
  for (let f = 0; f < 4; f++) {
    const fx = -0.028 + f * 0.018;
    d = blend(
      d,
      rod(x, y, z, [fx, grip + 0.0235, -0.02], [fx * 0.6 - 0.003, grip + 0.0215, -0.075], 0.0016, 0.001),
      0.008,
    );
  }
  return d + 0.0005 * noise3(x * 300, y * 300, z * 300);
}

const handTone = [0.42, 0.265, 0.19];

/** @param {number} stepM @param {number} grip @returns {Mesh} hand with its cuff */
export function buildHand(stepM, grip) {
  const mesh = new Mesh();
  const hand = meshOfSurface(
    (x, y, z) => handDistance(x, y, z, grip),
    [-0.085, -0.06, -0.17],
    [0.085, 0.075, 0.065],
    stepM,
    material.skin,
    (x, y, z, part) => {
      const mottle = fbm3(x * 60, y * 60, z * 60, 4);
      let red = 0;
      for (let f = 0; f < 4; f++)
        red = Math.max(
          red,
          smoothStep(0.017, 0.006, Math.hypot(x + 0.031 - f * 0.0205, z + 0.006, (y - grip - 0.016) * 0.6)),
        );
      const second =
        smoothStep(0.008, 0.002, Math.abs(Math.hypot(y, z) - grip - 0.018)) *
        smoothStep(0.5, 0.1, Math.abs(Math.atan2(y, z) + 0.15));
      red = Math.max(red, second * 0.7);
      const vein =
        smoothStep(0.1, 0.02, Math.abs(noise2(x * 70 + 3, z * 26))) *
        smoothStep(0.012, 0.02, y - grip) *
        smoothStep(-0.01, -0.03, z);
      const soil = smoothStep(0.0, 0.5, noise3(x * 120, y * 120, z * 120)) * 0.25;
      part.colour = [
        handTone[0] * (1 + 0.06 * mottle + 0.06 * red - 0.16 * vein - soil * 0.5),
        handTone[1] * (1 + 0.06 * mottle - 0.13 * red - 0.05 * vein - soil * 0.5),
        handTone[2] * (1 - 0.12 * red + 0.06 * vein - soil * 0.4),
      ];
      part.openness = 0.55 + 0.45 * smoothStep(-0.03, 0.02, y);
    },
  );
  mesh.add(hand);
  addCuff(mesh, grip);
  return mesh;
}

function addCuff(mesh, grip) {
  mesh.colour = coatTone;
  const start = [-0.006, grip - 0.003, -0.118];
  const path = curveThrough(
    [start, [-0.008, grip - 0.012, -0.17], [-0.012, grip - 0.035, -0.26], [-0.02, grip - 0.08, -0.42]],
    14,
  );
  addTube(
    mesh,
    path,
    (t, a) =>
      (0.041 + 0.022 * t) *
      (1 +
        0.1 *
          Math.sin(t * 34 + Math.sin(a * 1 + 1) * 2.2 + 2 * noise2(a, t * 6)) *
          smoothStep(0.04, 0.15, t) +
        0.03 * noise2(a * 2, t * 12)),
    48,
    material.cloth,
    { seed: 1 },
  );
  mesh.colour = coatTone.map((c) => c * 1.25);
  addTube(
    mesh,
    curveThrough(
      [
        [start[0], start[1] + 0.001, start[2] - 0.002],
        [start[0], start[1], start[2] - 0.03],
      ],
      6,
    ),
    (t, a) => 0.0435 + 0.001 * Math.sin(a * 3) - 0.001 * t,
    48,
    material.cloth,
    { seed: 4, capped: false },
  );
}
