// The lie of the land: near bank with its mud, the river bed, the far bank, meadows and hills.

import { material } from './materials.mjs';
import { Mesh } from './mesh.mjs';
import { fbm2, mix, noise2, randomStream, smoothStep } from './seededNoise.mjs';
import { addSheet, addTurned } from './solids.mjs';

export const farShoreZ = 92;

/** Height of the ground over low water at a place, metres. */
export function groundHeight(x, z) {
  const wander = fbm2(x * 0.11, z * 0.11, 3) * 2.6 + fbm2(x * 0.6 + 9, z * 0.6, 2) * 0.5;
  const inland = -(z + wander);
  if (z < farShoreZ * 0.5) {
    if (inland < 0) return Math.max(-2.6, inland * 0.13);
    const slope =
      inland < 8 ? inland * 0.085 : inland < 13 ? 0.68 + (inland - 8) * 0.3 : 2.18 + (inland - 13) * 0.02;
    return slope + fbm2(x * 0.9, z * 0.9, 3) * 0.16 * smoothStep(0.5, 3, inland);
  }
  const beyond = z - farShoreZ + wander * 2;
  if (beyond < 0) return Math.max(-2.6, beyond * 0.14);
  const shore = Math.min(beyond * 0.22, 1.3) + Math.min(beyond, 300) * 0.012;
  const hill =
    smoothStep(90, 620, beyond) *
    (62 + 60 * fbm2(x * 0.0021 + 5, z * 0.0016, 4) + 26 * noise2(x * 0.0011 + 2.2, 4.1));
  return shore + Math.max(0, hill) + fbm2(x * 0.07, z * 0.07, 3) * 0.5;
}

const mudTone = [0.165, 0.145, 0.115];
const meadowTone = [0.115, 0.15, 0.045];
const hillTone = [0.06, 0.085, 0.032];

/** @param {Mesh} mesh */
function addGround(mesh, x0, x1, z0, z1, step, pick) {
  const columns = Math.ceil((x1 - x0) / step);
  const rows = Math.ceil((z1 - z0) / step);
  const part = new Mesh();
  addSheet(
    part,
    columns,
    rows,
    (s, t) => {
      const x = mix(x0, x1, s);
      const z = mix(z1, z0, t);
      return [x, groundHeight(x, z), z];
    },
    material.mud,
    {
      place: (s, t) => [mix(x0, x1, s), mix(z1, z0, t), 0],
      colour: (_s, _t, p) =>
        pick(p) === material.mud ? mudTone : pick(p) === material.forest ? hillTone : meadowTone,
    },
  );
  const [p, c] = [part.vertices, part.corners];
  for (let i = 0; i < part.triangleCount; i++) {
    const at = c[i * 3] * 13;
    part.materials[i] = pick([p[at], p[at + 1], p[at + 2]]);
  }
  mesh.add(part);
}

const nearKind = ([x, y, z]) =>
  y + fbm2(x * 0.7, z * 0.7, 4) * 0.35 < 0.92 ? material.mud : material.meadow;
const farKind = ([x, y, z]) => {
  if (y < 0.75) return material.mud;
  return z > farShoreZ + 190 && fbm2(x * 0.011, z * 0.013, 4) > -0.06 ? material.forest : material.meadow;
};

/** Near bank and bed, fine where it is looked at closely. @param {Mesh} mesh */
export function addNearBank(mesh, x0 = -34, x1 = 40, z0 = -30) {
  addGround(mesh, x0, x1, z0, 9, 0.28, nearKind);
  addGround(mesh, x0 - 80, x0, z0, 14, 2.5, nearKind);
  addGround(mesh, x1, x1 + 80, z0, 14, 2.5, nearKind);
}

/** @param {Mesh} mesh */
export function addFarBank(mesh) {
  addGround(mesh, -420, 420, farShoreZ - 10, farShoreZ + 190, 4, farKind);
  addGround(mesh, -1300, 1300, farShoreZ + 180, 1300, 16, farKind);
}

/** The level of the water as one great sheet. @param {Mesh} mesh */
export function addWater(mesh) {
  const corner = (x, z) => mesh.vertex(x, 0, z, 0, 1, 0, x, z, 0);
  mesh.quad(
    corner(-2500, -60),
    corner(2500, -60),
    corner(2500, farShoreZ + 40),
    corner(-2500, farShoreZ + 40),
    material.water,
  );
}

/** Stones and shells lying on the mud about a place. @param {Mesh} mesh */
export function addPebbles(mesh, seed, centreX, centreZ, radiusM, count) {
  const next = randomStream(seed);
  const stone = new Mesh();
  stone.colour = [1, 1, 1];
  addTurned(
    stone,
    [
      [0.001, -0.8],
      [0.7, -0.6],
      [1, 0],
      [0.72, 0.55],
      [0.001, 0.75],
    ],
    9,
    material.pebble,
  );
  for (let i = 0; i < count; i++) {
    const angle = next() * Math.PI * 2;
    const r = radiusM * Math.sqrt(next());
    const x = centreX + Math.cos(angle) * r;
    const z = centreZ + Math.sin(angle) * r;
    if (fbm2(x * 0.8 + 7, z * 0.8, 3) < -0.05 && next() < 0.8) continue;
    const y = groundHeight(x, z);
    if (y < -0.05 || y > 1.1) continue;
    const size = 0.006 + 0.05 * next() ** 6 + 0.014 * next();
    const tone = 0.1 + 0.2 * next();
    const wet = y < 0.15 ? 0.55 : 1;
    const yaw = next() * 6.3;
    stone.colour = [1, 1, 1];
    const [c, s] = [Math.cos(yaw) * size, Math.sin(yaw) * size];
    const squash = 0.45 + 0.3 * next();
    mesh.add(stone, { m: [c * 1.3, 0, s, 0, size * squash, 0, -s * 1.3, 0, c], t: [x, y + size * 0.1, z] }, [
      tone * 1.05 * wet,
      tone * wet,
      tone * (0.8 + 0.15 * next()) * wet,
    ]);
  }
}
