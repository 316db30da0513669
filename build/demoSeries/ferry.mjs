// The ferry LOW WATER: a broad, flat river boat with a small deckhouse, an awning and a ramp at each end.
// Its own axes: x along (12 m), z across, y over the waterline; the side towards −z carries the name.

import { addLettering, textWidth } from './lettering.mjs';
import { material } from './materials.mjs';
import { toned } from './mesh.mjs';
import { fbm2, noise2, randomStream, smoothStep } from './seededNoise.mjs';
import { addBox, addSheet, addTube, curveThrough } from './solids.mjs';

const halfLength = 6;
const deckY = 0.62;

export const ferryTones = {
  hull: [0.035, 0.12, 0.125],
  sheer: [0.56, 0.5, 0.37],
  boot: [0.2, 0.055, 0.035],
  house: [0.6, 0.55, 0.43],
  board: [0.03, 0.045, 0.05],
  letter: [0.72, 0.62, 0.38],
  wood: [0.31, 0.26, 0.2],
};

const beamAt = (x) => 1.95 * (1 - 0.3 * Math.abs(x / halfLength) ** 3);
const sheerAt = (x) => 0.98 + 0.34 * (x / halfLength) ** 2;
const keelAt = (x) => -0.45 + 0.95 * smoothStep(3.2, 6.1, Math.abs(x));

/** Place on the hull's outside. t 0 at the keel, 1 at the sheer. */
function hullPoint(x, t, side, out = 0) {
  const y = keelAt(x) + (sheerAt(x) - keelAt(x)) * t;
  const flare = 0.8 + 0.2 * Math.sqrt(Math.max(0, t));
  return [x, y, side * (beamAt(x) * flare + out)];
}

function addHull(mesh) {
  const strakes = [0, 0.28, 0.46, 0.63, 0.79, 1];
  for (const side of [-1, 1])
    for (let k = 0; k < 5; k++) {
      const tone = k === 4 ? ferryTones.sheer : k < 1 ? ferryTones.boot : ferryTones.hull;
      addSheet(
        mesh,
        48,
        3,
        (s, t) => {
          const x = (s * 2 - 1) * halfLength * (side < 0 ? 1 : -1);
          const share = strakes[k] + (strakes[k + 1] - strakes[k]) * (1 - t);
          const lap = 0.022 * t + 0.004 * noise2(x * 1.3 + k * 5, side);
          return hullPoint(x, share, side, lap);
        },
        material.paint,
        { place: (s, t) => [s * 12 + k * 3, t * 0.3, k * 1.7 + side], colour: () => tone },
      );
    }
  mesh.colour = ferryTones.hull;
  for (const end of [-1, 1])
    addSheet(
      mesh,
      6,
      4,
      (s, t) => {
        const p = hullPoint(end * halfLength, 1 - t, s < 0.5 ? -1 : 1);
        return [p[0], p[1], p[2] * Math.abs(s * 2 - 1)];
      },
      material.paint,
      { place: (s, t) => [s * 3, t, 4] },
    );
  for (const side of [-1, 1]) {
    mesh.colour = [0.2, 0.16, 0.12];
    const rail = [];
    for (let i = 0; i <= 30; i++) {
      const x = (i / 15 - 1) * halfLength;
      rail.push([x, sheerAt(x) - 0.335, side * (beamAt(x) + 0.05)]);
    }
    addTube(mesh, rail, 0.055, 8, material.wood, { seed: side * 2 });
    mesh.colour = ferryTones.wood;
    addTube(
      mesh,
      rail.map(([x, y, z]) => [x, y + 0.365, z - side * 0.06]),
      (_t, a) => 0.075 + 0.03 * Math.abs(Math.cos(a)),
      8,
      material.wood,
      { seed: 5 + side },
    );
    addInside(mesh, side);
  }
}

function addInside(mesh, side) {
  mesh.colour = [0.3, 0.32, 0.28];
  addSheet(
    mesh,
    40,
    2,
    (s, t) => {
      const x = (s * 2 - 1) * halfLength * (side > 0 ? 1 : -1);
      return [x, deckY + (sheerAt(x) - deckY) * (1 - t), side * (beamAt(x) - 0.1)];
    },
    material.paint,
    { place: (s, t) => [s * 12, t * 0.4, 8] },
  );
}

function addDeck(mesh) {
  const next = randomStream(61);
  for (let k = -9; k < 9; k++) {
    const z = k * 0.21;
    for (const [a, b] of [
      [-5.6, -0.4 + next()],
      [0.6 + next() * 0.1, 5.6],
    ]) {
      const reach = (x) => beamAt(x) - 0.12;
      if (Math.abs(z + 0.1) > Math.min(reach(a), reach(b)) + 0.1) continue;
      const tone = 0.75 + 0.45 * next();
      mesh.colour = ferryTones.wood.map((c) => c * tone);
      addBox(
        mesh,
        [a, deckY - 0.05, z + 0.006],
        [b, deckY + next() * 0.006, z + 0.202],
        material.deck,
        next() * 30,
      );
    }
  }
}

/** Upright boards along a wall of the deckhouse, with gaps for windows. */
function addBoardWall(mesh, next, from, to, fixed, alongX, low, high, windows) {
  const width = 0.155;
  const count = Math.round((to - from) / width);
  for (let i = 0; i < count; i++) {
    const a = from + ((to - from) * i) / count;
    const b = a + (to - from) / count - 0.008;
    const gap = windows.find(([x0, x1]) => (a + b) / 2 > x0 && (a + b) / 2 < x1);
    const pieces = gap
      ? [
          [low, gap[2]],
          [gap[3], high],
        ]
      : [[low, high]];
    const tone = 0.92 + 0.14 * next();
    mesh.colour = ferryTones.house.map((c) => c * tone);
    const proud = next() * 0.006;
    for (const [y0, y1] of pieces) {
      const corners = alongX
        ? [
            [a, y0, fixed - 0.02 - proud],
            [b, y1, fixed + 0.02],
          ]
        : [
            [fixed - 0.02, y0, a],
            [fixed + 0.02 + proud, y1, b],
          ];
      addBox(mesh, corners[0], corners[1], material.paint, next() * 30);
    }
  }
}

function addWindow(mesh, x0, x1, y0, y1, z, side) {
  mesh.colour = [0.015, 0.018, 0.02];
  addBox(mesh, [x0, y0, z - 0.005], [x1, y1, z + 0.005], material.glass);
  mesh.colour = [0.06, 0.13, 0.13];
  const out = z + side * 0.045;
  const [a, b] = [Math.min(z, out), Math.max(z, out)];
  addBox(mesh, [x0 - 0.05, y0 - 0.06, a], [x1 + 0.05, y0, b], material.paint, 3);
  addBox(mesh, [x0 - 0.05, y1, a], [x1 + 0.05, y1 + 0.05, b], material.paint, 4);
  addBox(mesh, [x0 - 0.05, y0, a], [x0, y1, b], material.paint, 5);
  addBox(mesh, [x1, y0, a], [x1 + 0.05, y1, b], material.paint, 6);
  const middle = (x0 + x1) / 2;
  addBox(mesh, [middle - 0.018, y0, a], [middle + 0.018, y1, b], material.paint, 7);
}

const house = { x0: -2.3, x1: 1.1, z0: -0.98, z1: 0.98, roofY: 2.62 };

function addHouse(mesh) {
  const next = randomStream(62);
  const { x0, x1, z0, z1, roofY } = house;
  const sideWindows = [
    [-1.95, -1.02, 1.45, 2.05],
    [-0.25, 0.7, 1.45, 2.05],
  ];
  for (const z of [z0, z1]) {
    addBoardWall(mesh, next, x0, x1, z, true, deckY, roofY, sideWindows);
    for (const [a, b, y0, y1] of sideWindows) addWindow(mesh, a, b, y0, y1, z, z < 0 ? -1 : 1);
  }
  for (const x of [x0, x1])
    addBoardWall(mesh, next, z0, z1, x, false, deckY, roofY, [[-0.7, -0.1, 1.5, 2.1]]);
  mesh.colour = [0.11, 0.1, 0.09];
  addSheet(
    mesh,
    24,
    8,
    (s, t) => {
      const z = (s * 2 - 1) * 1.25;
      return [
        x0 - 0.28 + (x1 - x0 + 0.56) * t,
        roofY + 0.2 - 0.13 * (s * 2 - 1) ** 2 + 0.012 * noise2(s * 5, t * 7),
        z,
      ];
    },
    material.felt,
    { place: (s, t) => [s * 2.5, t * 4, 0] },
  );
  mesh.colour = [0.3, 0.27, 0.2];
  for (const z of [-1.27, 1.22])
    addBox(mesh, [x0 - 0.3, roofY, z], [x1 + 0.3, roofY + 0.1, z + 0.05], material.wood, z);
  for (const x of [x0 - 0.32, x1 + 0.27])
    addBox(mesh, [x, roofY + 0.02, -1.24], [x + 0.05, roofY + 0.14, 1.24], material.wood, x);
  mesh.colour = [0.08, 0.08, 0.08];
  addTube(
    mesh,
    [
      [-1.7, roofY, 0.4],
      [-1.7, roofY + 0.95, 0.4],
    ],
    0.075,
    12,
    material.iron,
  );
  addTube(
    mesh,
    [
      [-1.7, roofY + 0.95, 0.4],
      [-1.7, roofY + 1.0, 0.4],
    ],
    0.12,
    12,
    material.iron,
  );
}

function addNames(mesh) {
  const board = { x0: -1.98, x1: 0.82, y0: 2.17, y1: 2.54, z: house.z0 - 0.075 };
  mesh.colour = ferryTones.board;
  addBox(mesh, [board.x0, board.y0, board.z], [board.x1, board.y1, board.z + 0.05], material.paint, 14);
  mesh.colour = ferryTones.letter;
  for (const [a, b, c, d] of [
    [board.x0, board.x1, board.y0, board.y0 + 0.022],
    [board.x0, board.x1, board.y1 - 0.022, board.y1],
    [board.x0, board.x0 + 0.022, board.y0, board.y1],
    [board.x1 - 0.022, board.x1, board.y0, board.y1],
  ])
    addBox(mesh, [a, c, board.z - 0.012], [b, d, board.z], material.paint, a);
  const height = 0.225;
  const start = (board.x0 + board.x1) / 2 - (textWidth('LOW WATER') * height) / 2;
  addLettering(
    mesh,
    'LOW WATER',
    height,
    (x, y) => ({ p: [start + x, board.y0 + 0.075 + y, board.z], n: [0, 0, -1] }),
    material.sign,
  );
  mesh.colour = [0.04, 0.06, 0.07];
  const small = 0.19;
  addLettering(
    mesh,
    'ODALYS B',
    small,
    (x, y) => {
      const along = -5.15 + x;
      const t = 0.815 + (y / small) * 0.125;
      const p = hullPoint(along, t, -1, 0.02);
      return { p, n: [-0.12, 0.1, -1] };
    },
    material.sign,
  );
}

function addRamp(mesh, end, raise) {
  const next = randomStream(63 + end);
  const held = mesh.place;
  for (let k = 0; k < 9; k++) {
    const z = -1.17 + k * 0.262;
    mesh.colour = toned(ferryTones.wood, 0.7 + 0.4 * next());
    const base = mesh.vertexCount;
    addBox(mesh, [0, -0.03, z], [1.75, 0.03, z + 0.25], material.deck, next() * 20);
    tilt(mesh, base, end, raise);
  }
  for (const along of [0.25, 0.9, 1.55]) {
    mesh.colour = ferryTones.wood.map((c) => c * 0.75);
    const base = mesh.vertexCount;
    addBox(mesh, [along, -0.11, -1.18], [along + 0.13, -0.03, 1.2], material.wood, along);
    tilt(mesh, base, end, raise);
  }
  mesh.place = held;
}

/** Turns what was added since `base` up about the ramp's hinge at the ferry's end. */
function tilt(mesh, base, end, raise) {
  const [c, s] = [Math.cos(raise), Math.sin(raise)];
  const at = mesh.place;
  for (let i = base; i < mesh.vertexCount; i++) {
    const v = mesh.vertices.subarray(i * 13, i * 13 + 6);
    // undo the placing, tilt, place again: placings are rigid here
    const local = at ? unplace(at, v[0], v[1], v[2]) : [v[0], v[1], v[2]];
    const normal = at ? unturn(at, v[3], v[4], v[5]) : [v[3], v[4], v[5]];
    const p = [end * (5.95 + local[0] * c - local[1] * s), 0.88 + local[0] * s + local[1] * c, local[2]];
    const n = [end * (normal[0] * c - normal[1] * s), normal[0] * s + normal[1] * c, normal[2]];
    const q = at ? turn(at, p) : p;
    const m = at ? turn({ m: at.m, t: [0, 0, 0] }, n) : n;
    v.set([q[0], q[1], q[2], m[0], m[1], m[2]]);
  }
}

const turn = ({ m, t }, [x, y, z]) => [
  m[0] * x + m[1] * y + m[2] * z + t[0],
  m[3] * x + m[4] * y + m[5] * z + t[1],
  m[6] * x + m[7] * y + m[8] * z + t[2],
];
const unturn = ({ m }, x, y, z) => [
  m[0] * x + m[3] * y + m[6] * z,
  m[1] * x + m[4] * y + m[7] * z,
  m[2] * x + m[5] * y + m[8] * z,
];
const unplace = (place, x, y, z) => unturn(place, x - place.t[0], y - place.t[1], z - place.t[2]);

/** A cloth stretched from the deckhouse to two posts, sagging, with a scalloped hem. */
export function addAwning(
  mesh,
  {
    x0 = 1.35,
    x1 = 4.4,
    y0 = 2.55,
    y1 = 2.3,
    half = 1.35,
    sag = 0.16,
    stripes = true,
    tones = [
      [0.62, 0.56, 0.43],
      [0.3, 0.075, 0.05],
    ],
  } = {},
) {
  const height = (s, t) => {
    const x = s;
    const across = t * 2 - 1;
    const droop =
      sag * (4 * x * (1 - x)) * (0.6 + 0.4 * (1 - across * across)) +
      0.05 * (1 - Math.abs(across)) * Math.sin(x * 19 + across * 4) * (0.3 + x);
    return y0 + (y1 - y0) * x - droop + 0.12 * (1 - across * across) + 0.03 * fbm2(s * 5, t * 5, 3);
  };
  addSheet(mesh, 70, 60, (s, t) => [x0 + (x1 - x0) * s, height(s, t), (t * 2 - 1) * half], material.cloth, {
    place: (s, t) => [s * (x1 - x0), t * 2 * half, 0],
    colour: (_s, t) => tones[stripes && Math.floor(t * 15) % 2 ? 1 : 0],
  });
  for (const side of [0, 1])
    addSheet(
      mesh,
      120,
      10,
      (s, t) => {
        const scallop = 0.17 + 0.06 * Math.abs(Math.sin(s * Math.PI * 9));
        return [
          x0 + (x1 - x0) * s,
          height(s, side) - t * scallop,
          (side * 2 - 1) * (half + 0.02 * Math.sin(s * 40 + t * 2) * t),
        ];
      },
      material.cloth,
      { place: (s, t) => [s * (x1 - x0), t * 0.2, 4], colour: () => tones[stripes ? side : 0] },
    );
  mesh.colour = ferryTones.wood;
  for (const z of [-half + 0.04, half - 0.04])
    addTube(
      mesh,
      [
        [x1, deckY, z],
        [x1, y1 + 0.06, z],
      ],
      0.04,
      8,
      material.wood,
      { seed: z },
    );
}

/** A rope hanging between two points. */
export function addRope(mesh, from, to, sag, radius, sides = 10) {
  const path = [];
  const count = 28;
  for (let i = 0; i <= count; i++) {
    const t = i / count;
    path.push([
      from[0] + (to[0] - from[0]) * t,
      from[1] + (to[1] - from[1]) * t - sag * 4 * t * (1 - t),
      from[2] + (to[2] - from[2]) * t,
    ]);
  }
  mesh.colour = [0.31, 0.26, 0.18];
  addTube(mesh, path, (_t, a) => radius * (1 + 0.06 * Math.sin(a * 3)), sides, material.rope);
}

function addFittings(mesh) {
  const next = randomStream(64);
  for (const side of [-1, 1]) {
    const posts = [-5, -3.9, -2.8, 2.2, 3.3, 4.4, 5.2];
    mesh.colour = ferryTones.wood;
    for (const x of posts)
      addTube(
        mesh,
        [
          [x, sheerAt(x), side * (beamAt(x) - 0.05)],
          [x, sheerAt(x) + 0.62, side * (beamAt(x) - 0.05)],
        ],
        0.028,
        8,
        material.wood,
        { seed: x },
      );
    for (let i = 0; i < posts.length - 1; i++) {
      if (i === 2) continue;
      const [a, b] = [posts[i], posts[i + 1]];
      addRope(
        mesh,
        [a, sheerAt(a) + 0.58, side * (beamAt(a) - 0.05)],
        [b, sheerAt(b) + 0.58, side * (beamAt(b) - 0.05)],
        0.09,
        0.014,
        6,
      );
    }
    for (const x of [-4.4, -1.2, 2.6]) addFender(mesh, next, x, side);
  }
  addCrates(mesh, next);
  mesh.colour = [0.05, 0.05, 0.05];
  for (const [x, z] of [
    [-5.3, -1],
    [-5.3, 1],
    [5.3, -1],
    [5.3, 1],
  ]) {
    addTube(
      mesh,
      [
        [x, deckY, z],
        [x, deckY + 0.32, z],
      ],
      (t) => 0.06 + 0.03 * smoothStep(0.75, 0.95, t),
      10,
      material.iron,
    );
  }
}

function addFender(mesh, next, x, side) {
  const z = side * (beamAt(x) + 0.12);
  const top = sheerAt(x) - 0.08;
  addRope(mesh, [x, top, side * (beamAt(x) + 0.02)], [x, top - 0.2, z], 0, 0.014, 6);
  mesh.colour = toned([0.2, 0.15, 0.09], 0.8 + 0.5 * next());
  addTube(
    mesh,
    curveThrough(
      [
        [x, top - 0.18, z],
        [x, top - 0.3, z],
        [x, top - 0.55, z],
        [x, top - 0.66, z],
      ],
      4,
    ),
    (t) => 0.045 + 0.065 * Math.sin(Math.PI * t) ** 0.6,
    14,
    material.rope,
  );
}

function addCrates(mesh, next) {
  for (const [x, z, size, turnBy] of [
    [2.6, 0.75, 0.5, 0.1],
    [3.25, 0.85, 0.42, -0.2],
    [-3.4, 0.6, 0.55, 0.3],
  ]) {
    for (let k = 0; k < 4; k++) {
      mesh.colour = toned([0.36, 0.27, 0.16], 0.7 + 0.5 * next());
      const y = deckY + (k * size) / 4;
      addBox(
        mesh,
        [x - size / 2 + turnBy * 0.05 * k, y + 0.008, z - size / 2],
        [x + size / 2, y + size / 4 - 0.008, z + size / 2],
        material.wood,
        next() * 40,
      );
    }
  }
  mesh.colour = [0.3, 0.2, 0.11];
  addTube(
    mesh,
    curveThrough(
      [
        [4.1, deckY, 0.7],
        [4.1, deckY + 0.35, 0.7],
        [4.1, deckY + 0.7, 0.7],
      ],
      5,
    ),
    (t) => 0.23 + 0.05 * Math.sin(Math.PI * t),
    20,
    material.wood,
  );
}

/** @param {import('./mesh.mjs').Mesh} mesh @param {{ awning?: boolean, rampUp?: [number, number] }} [options] */
export function addFerry(mesh, { awning = true, rampUp = [0.85, 0.5] } = {}) {
  const colour = mesh.colour;
  addHull(mesh);
  addDeck(mesh);
  addHouse(mesh);
  addNames(mesh);
  addRamp(mesh, -1, rampUp[0]);
  addRamp(mesh, 1, rampUp[1]);
  addFittings(mesh);
  if (awning) addAwning(mesh);
  mesh.colour = colour;
}
