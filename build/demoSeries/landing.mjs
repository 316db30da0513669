// The landing stage: boards on tarred posts, running out over the mud to low water.

import { groundHeight } from './banks.mjs';
import { addRope } from './ferry.mjs';
import { material } from './materials.mjs';
import { noise2, randomStream } from './seededNoise.mjs';
import { addBox, addTube } from './solids.mjs';

const postTone = [0.135, 0.122, 0.108];

/** A post driven into the ground, leaning a little. @returns {number[]} its top */
export function addPost(mesh, next, x, z, top, radius = 0.13) {
  const lean = [(next() - 0.5) * 0.09, (next() - 0.5) * 0.09];
  const foot = Math.min(-0.3, groundHeight(x, z) - 0.3);
  const path = [];
  for (let i = 0; i <= 7; i++) {
    const y = foot + ((top - foot) * i) / 7;
    path.push([x + lean[0] * (y - foot), y, z + lean[1] * (y - foot)]);
  }
  const tone = 0.75 + 0.5 * next();
  mesh.colour = postTone.map((c) => c * tone);
  const seed = next() * 30;
  addTube(
    mesh,
    path,
    (t, a) => radius * (1.06 - 0.1 * t) * (1 + 0.05 * noise2(a * 1.5 + seed, t * 5)),
    14,
    material.post,
    { seed },
  );
  return path[7];
}

/**
 * @param {import('./mesh.mjs').Mesh} mesh
 * @param {{ x: number, z0: number, z1: number, width?: number, y?: number, seed?: number }} options along z
 */
export function addStage(mesh, { x, z0, z1, width = 2.2, y = 1.15, seed = 71 }) {
  const next = randomStream(seed);
  for (let z = z0; z < z1; z += 0.185) {
    if (next() < 0.025) continue;
    const tone = 0.7 + 0.55 * next();
    mesh.colour = [0.25 * tone, 0.232 * tone, 0.205 * tone];
    const skew = (next() - 0.5) * 0.09;
    addBox(
      mesh,
      [x - width / 2 + skew, y + next() * 0.012, z],
      [x + width / 2 + skew * 1.4, y + 0.055 + next() * 0.012, z + 0.168],
      material.deck,
      next() * 60,
    );
  }
  mesh.colour = [0.2, 0.17, 0.14];
  for (const dx of [-width / 2 + 0.25, 0, width / 2 - 0.35])
    addBox(mesh, [x + dx, y - 0.2, z0], [x + dx + 0.12, y, z1], material.wood, dx * 3);
  const tops = [[], []];
  for (let z = z0 + 0.4; z <= z1 + 0.1; z += 1.9) {
    [-1, 1].forEach((side, i) => {
      tops[i].push(addPost(mesh, next, x + side * (width / 2 + 0.05), z, y + 0.35 + 0.65 * next()));
    });
    mesh.colour = [0.15, 0.125, 0.1];
    addBox(
      mesh,
      [x - width / 2 - 0.1, y - 0.36, z - 0.08],
      [x + width / 2 + 0.1, y - 0.2, z + 0.06],
      material.post,
      z,
    );
  }
  for (const row of tops)
    for (let i = 0; i < row.length - 1; i++)
      if (next() < 0.8)
        addRope(
          mesh,
          [row[i][0], row[i][1] - 0.14, row[i][2]],
          [row[i + 1][0], row[i + 1][1] - 0.14, row[i + 1][2]],
          0.18 + 0.12 * next(),
          0.018,
          8,
        );
  return tops;
}

/** A rope laid in rings on the boards. */
export function addCoil(mesh, x, y, z, turns = 5, radius = 0.3, thick = 0.018) {
  const path = [];
  const count = turns * 26;
  for (let i = 0; i <= count; i++) {
    const a = (i / 26) * Math.PI * 2;
    const r = radius * (1 - (0.5 * i) / count) + 0.01 * Math.sin(a * 2.3);
    path.push([
      x + Math.cos(a) * r,
      y + thick + (i / count) * 0.06 + 0.006 * Math.sin(a * 3.1),
      z + Math.sin(a) * r,
    ]);
  }
  mesh.colour = [0.34, 0.28, 0.19];
  addTube(mesh, path, thick, 10, material.rope);
}

/** Old posts standing in the river, the last of an earlier stage. */
export function addOldPosts(mesh, places, seed = 72) {
  const next = randomStream(seed);
  for (const [x, z, top] of places) addPost(mesh, next, x, z, top, 0.1 + 0.07 * next());
}
