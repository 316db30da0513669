// The village over the river: gabled houses, a church, walls along the shore.

import { farShoreZ, groundHeight } from './banks.mjs';
import { material } from './materials.mjs';
import { placing } from './mesh.mjs';
import { randomStream } from './seededNoise.mjs';
import { addBox, addTube } from './solids.mjs';

const walls = [
  [0.55, 0.5, 0.41],
  [0.47, 0.36, 0.27],
  [0.6, 0.56, 0.5],
  [0.42, 0.4, 0.36],
  [0.5, 0.33, 0.24],
  [0.4, 0.44, 0.45],
];
const roofs = [
  [0.2, 0.1, 0.065],
  [0.15, 0.1, 0.08],
  [0.12, 0.12, 0.13],
  [0.24, 0.13, 0.08],
];

/** A face given by its corners in order. */
function addFace(mesh, corners, kind, texture) {
  const [a, b] = corners;
  const d = corners[corners.length - 1];
  const e = b.map((value, i) => value - a[i]);
  const f = d.map((value, i) => value - a[i]);
  const n = [f[1] * e[2] - f[2] * e[1], f[2] * e[0] - f[0] * e[2], f[0] * e[1] - f[1] * e[0]];
  const index = corners.map((p, i) => mesh.vertex(p[0], p[1], p[2], n[0], n[1], n[2], ...texture[i], 0));
  if (index.length === 3) mesh.triangle(index[0], index[1], index[2], kind);
  else mesh.quad(index[0], index[1], index[2], index[3], kind);
}

function addRoof(mesh, w, h, d, rise) {
  const over = 0.35;
  const eave = h - 0.12;
  const slope = Math.hypot(d / 2 + over, rise);
  for (const side of [-1, 1]) {
    const z = side * (d / 2 + over);
    const corners = [
      [-w / 2 - over, eave, z],
      [w / 2 + over, eave, z],
      [w / 2 + over, h + rise, 0],
      [-w / 2 - over, h + rise, 0],
    ];
    if (side > 0) corners.reverse();
    const texture =
      side > 0
        ? [
            [0, slope],
            [w, slope],
            [w, 0],
            [0, 0],
          ]
        : [
            [0, 0],
            [w, 0],
            [w, slope],
            [0, slope],
          ];
    addFace(mesh, corners, material.tile, texture);
  }
}

/** A house centred on the origin, its long side along x. @param {import('./mesh.mjs').Mesh} mesh @param {() => number} next */
function addHouse(mesh, next, w, h, d) {
  const rise = d * (0.42 + 0.2 * next());
  const kind = next() < 0.35 ? material.stone : material.plaster;
  const wall = walls[Math.floor(next() * walls.length)];
  mesh.colour = kind === material.stone ? [0.36, 0.33, 0.28] : wall;
  addBox(mesh, [-w / 2, -1, -d / 2], [w / 2, h, d / 2], kind, next() * 9);
  for (const side of [-1, 1])
    addFace(
      mesh,
      [
        [side * (w / 2), h, (-side * d) / 2],
        [side * (w / 2), h, (side * d) / 2],
        [side * (w / 2), h + rise, 0],
      ],
      kind,
      [
        [0, h],
        [d, h],
        [d / 2, h + rise],
      ],
    );
  addWindows(mesh, next, w, h, d);
  mesh.colour = roofs[Math.floor(next() * roofs.length)];
  addRoof(mesh, w, h, d, rise);
  for (let i = 0; i < 1 + (next() < 0.5 ? 1 : 0); i++) {
    const x = (i ? -1 : 1) * (w / 2 - 0.7);
    mesh.colour = [0.3, 0.17, 0.12];
    addBox(mesh, [x - 0.35, h + rise - 0.9, -0.35], [x + 0.35, h + rise + 0.9, 0.35], material.stone, 2);
    mesh.colour = [0.35, 0.2, 0.13];
    addTube(
      mesh,
      [
        [x, h + rise + 0.9, 0],
        [x, h + rise + 1.25, 0],
      ],
      0.14,
      6,
      material.plain,
    );
  }
}

function addWindows(mesh, next, w, h, d) {
  const columns = Math.max(2, Math.floor(w / 2.3));
  for (let floor = 0; floor < Math.max(1, Math.floor(h / 2.6)); floor++)
    for (let i = 0; i < columns; i++) {
      const x = (-0.5 + (i + 0.5) / columns) * (w - 0.8);
      const y = 0.9 + floor * 2.6;
      const door = floor === 0 && i === Math.floor(columns / 2);
      const half = door ? 0.5 : 0.42;
      const bottom = door ? 0 : y;
      const top = y + 1.25;
      mesh.colour = [0.6, 0.58, 0.52];
      addBox(
        mesh,
        [x - half - 0.09, bottom - 0.1, -d / 2 - 0.07],
        [x + half + 0.09, top + 0.1, -d / 2 + 0.02],
        material.plain,
      );
      mesh.colour = door ? [0.07, 0.1, 0.09] : [0.02, 0.022, 0.025];
      addBox(
        mesh,
        [x - half, bottom, -d / 2 - 0.09],
        [x + half, top, -d / 2 - 0.03],
        door ? material.plain : material.glass,
      );
      if (door) continue;
      mesh.colour = [0.62, 0.6, 0.55];
      addBox(mesh, [x - 0.03, bottom, -d / 2 - 0.11], [x + 0.03, top, -d / 2 - 0.08], material.plain);
      addBox(
        mesh,
        [x - half, (bottom + top) / 2 - 0.03, -d / 2 - 0.11],
        [x + half, (bottom + top) / 2 + 0.03, -d / 2 - 0.08],
        material.plain,
      );
      if (next() < 0.4) addShutters(mesh, next, x, bottom, top, half, d);
    }
}

function addShutters(mesh, next, x, bottom, top, half, d) {
  mesh.colour = [
    [0.06, 0.12, 0.12],
    [0.1, 0.06, 0.045],
    [0.1, 0.14, 0.1],
  ][Math.floor(next() * 3)];
  for (const side of [-1, 1]) {
    const a = x + side * (half + 0.09);
    const b = a + side * 0.42;
    addBox(
      mesh,
      [Math.min(a, b), bottom - 0.05, -d / 2 - 0.1],
      [Math.max(a, b), top + 0.05, -d / 2 - 0.03],
      material.plain,
    );
  }
}

function addChurch(mesh, next) {
  mesh.colour = [0.36, 0.34, 0.3];
  addHouse(mesh, next, 15, 6.5, 8);
  mesh.colour = [0.38, 0.36, 0.32];
  addBox(mesh, [-10.4, -1, -2.4], [-5.6, 13, 2.4], material.stone, 4);
  mesh.colour = [0.03, 0.03, 0.03];
  for (const x of [-8.9, -7.8]) addBox(mesh, [x, 9.6, -2.5], [x + 0.7, 11.6, -2.3], material.plain);
  mesh.colour = [0.12, 0.12, 0.13];
  const tip = [-8, 20.5, 0];
  const base = [
    [-10.7, 13, -2.7],
    [-5.3, 13, -2.7],
    [-5.3, 13, 2.7],
    [-10.7, 13, 2.7],
  ];
  for (let i = 0; i < 4; i++)
    addFace(mesh, [base[i], base[(i + 1) % 4], tip], material.tile, [
      [0, 0],
      [5, 0],
      [2.5, 8],
    ]);
}

/** @param {import('./mesh.mjs').Mesh} mesh */
export function addVillage(mesh, seed = 41) {
  const next = randomStream(seed);
  const held = mesh.place;
  for (let i = 0; i < 26; i++) {
    const row = i % 3;
    const x = -52 + Math.floor(i / 3) * 11.4 + (next() - 0.5) * 6 + row * 3;
    const z = farShoreZ + 13 + row * 13 + next() * 5;
    mesh.place = placing([x, groundHeight(x, z) + 0.2, z], (next() - 0.5) * 0.7 + (next() < 0.25 ? 1.57 : 0));
    addHouse(mesh, next, 6.5 + next() * 4.5, 3 + Math.floor(next() * 2.2) * 2.5, 5.2 + next() * 1.8);
  }
  mesh.place = placing([-8, groundHeight(-8, farShoreZ + 54) + 0.5, farShoreZ + 54], 0.15);
  addChurch(mesh, next);
  mesh.place = null;
  mesh.colour = [0.25, 0.23, 0.2];
  for (let i = 0; i < 9; i++) {
    const x = -46 + i * 9.5;
    const z = farShoreZ + 7 + Math.sin(i * 1.7) * 0.8;
    addBox(mesh, [x, -0.5, z], [x + 9.6, 1.9 + Math.sin(i * 2.3) * 0.15, z + 0.6], material.stone, i * 3);
  }
  mesh.place = held;
}
