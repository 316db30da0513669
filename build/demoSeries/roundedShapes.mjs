// Soft bodies described by distance, and the mesh of their surface (surface nets after Gibson 1998).

import { Mesh } from './mesh.mjs';

/** @typedef {import('./mesh.mjs').Triple} Triple */

/** Union with a rounded joint of width k. */
export function blend(a, b, k) {
  const h = Math.max(0, k - Math.abs(a - b)) / k;
  return (a < b ? a : b) - h * h * k * 0.25;
}

/** Takes b out of a, with a rounded rim. */
export const carve = (a, b, k) => -blend(-a, b, k);

export const ball = (x, y, z, cx, cy, cz, r) => Math.sqrt((x - cx) ** 2 + (y - cy) ** 2 + (z - cz) ** 2) - r;

/** Near enough to an ellipsoid's distance for meshing. */
export function egg(x, y, z, cx, cy, cz, rx, ry, rz) {
  const px = x - cx;
  const py = y - cy;
  const pz = z - cz;
  const k0 = Math.sqrt((px / rx) ** 2 + (py / ry) ** 2 + (pz / rz) ** 2);
  const k1 = Math.sqrt((px / (rx * rx)) ** 2 + (py / (ry * ry)) ** 2 + (pz / (rz * rz)) ** 2);
  return k1 === 0 ? -Math.min(rx, ry, rz) : (k0 * (k0 - 1)) / k1;
}

/** A rod with round ends whose thickness runs from ra at a to rb at b. */
export function rod(x, y, z, a, b, ra, rb) {
  const bx = b[0] - a[0];
  const by = b[1] - a[1];
  const bz = b[2] - a[2];
  const px = x - a[0];
  const py = y - a[1];
  const pz = z - a[2];
  let t = (px * bx + py * by + pz * bz) / (bx * bx + by * by + bz * bz);
  t = t < 0 ? 0 : t > 1 ? 1 : t;
  return Math.sqrt((px - bx * t) ** 2 + (py - by * t) ** 2 + (pz - bz * t) ** 2) - (ra + (rb - ra) * t);
}

/**
 * The surface where `distance` is zero.
 * @param {(x: number, y: number, z: number) => number} distance metres, negative inside
 * @param {Triple} low @param {Triple} high @param {number} stepM @param {number} material
 * @param {(x: number, y: number, z: number, mesh: Mesh) => void} [dress] sets colour and openness
 * @returns {Mesh}
 */
export function meshOfSurface(distance, low, high, stepM, material, dress) {
  const size = [0, 1, 2].map((i) => Math.ceil((high[i] - low[i]) / stepM) + 1);
  const field = sampleField(distance, low, size, stepM);
  const mesh = new Mesh();
  const [nx, ny, nz] = size;
  const index = new Int32Array(nx * ny * nz).fill(-1);
  const at = (i, j, k) => (k * ny + j) * nx + i;
  for (let k = 0; k < nz - 1; k++)
    for (let j = 0; j < ny - 1; j++)
      for (let i = 0; i < nx - 1; i++) {
        const place = crossing(field, at, i, j, k);
        if (!place) continue;
        const x = low[0] + (i + place[0]) * stepM;
        const y = low[1] + (j + place[1]) * stepM;
        const z = low[2] + (k + place[2]) * stepM;
        const e = stepM * 0.6;
        const d = distance(x, y, z);
        dress?.(x, y, z, mesh);
        index[at(i, j, k)] = mesh.vertex(
          x,
          y,
          z,
          distance(x + e, y, z) - d,
          distance(x, y + e, z) - d,
          distance(x, y, z + e) - d,
          x,
          y,
          z,
        );
      }
  joinCells(mesh, field, index, at, size, material);
  return mesh;
}

/** Distances on the grid; far from the surface only a coarse grid is asked. */
function sampleField(distance, low, [nx, ny, nz], stepM) {
  const field = new Float32Array(nx * ny * nz);
  const block = 4;
  const limit = block * stepM * 1.6;
  for (let k0 = 0; k0 < nz; k0 += block)
    for (let j0 = 0; j0 < ny; j0 += block)
      for (let i0 = 0; i0 < nx; i0 += block) {
        const half = ((block - 1) * stepM) / 2;
        const d = distance(
          low[0] + i0 * stepM + half,
          low[1] + j0 * stepM + half,
          low[2] + k0 * stepM + half,
        );
        for (let k = k0; k < Math.min(nz, k0 + block); k++)
          for (let j = j0; j < Math.min(ny, j0 + block); j++)
            for (let i = i0; i < Math.min(nx, i0 + block); i++)
              field[(k * ny + j) * nx + i] =
                Math.abs(d) > limit
                  ? d
                  : distance(low[0] + i * stepM, low[1] + j * stepM, low[2] + k * stepM);
      }
  return field;
}

const edges = [
  [0, 1],
  [0, 2],
  [0, 4],
  [1, 3],
  [1, 5],
  [2, 3],
  [2, 6],
  [3, 7],
  [4, 5],
  [4, 6],
  [5, 7],
  [6, 7],
];

/** Mean of the places where the cell's edges cross the surface, in cells; null where none does. */
function crossing(field, at, i, j, k) {
  const value = (c) => field[at(i + (c & 1), j + ((c >> 1) & 1), k + (c >> 2))];
  let inside = 0;
  for (let c = 0; c < 8; c++) if (value(c) < 0) inside++;
  if (inside === 0 || inside === 8) return null;
  let count = 0;
  const sum = [0, 0, 0];
  for (const [a, b] of edges) {
    const va = value(a);
    const vb = value(b);
    if (va < 0 === vb < 0) continue;
    const t = va / (va - vb);
    for (let axis = 0; axis < 3; axis++) {
      const pa = (a >> axis) & 1;
      sum[axis] += pa + (((b >> axis) & 1) - pa) * t;
    }
    count++;
  }
  return sum.map((value_) => value_ / count);
}

function joinCells(mesh, field, index, at, [nx, ny, nz], material) {
  const quad = (a, b, c, d) => {
    if (a >= 0 && b >= 0 && c >= 0 && d >= 0) mesh.quad(a, b, c, d, material);
  };
  for (let k = 1; k < nz - 1; k++)
    for (let j = 1; j < ny - 1; j++)
      for (let i = 1; i < nx - 1; i++) {
        const here = field[at(i, j, k)] < 0;
        if (here !== field[at(i + 1, j, k)] < 0)
          quad(
            index[at(i, j - 1, k - 1)],
            index[at(i, j, k - 1)],
            index[at(i, j, k)],
            index[at(i, j - 1, k)],
          );
        if (here !== field[at(i, j + 1, k)] < 0)
          quad(
            index[at(i - 1, j, k - 1)],
            index[at(i, j, k - 1)],
            index[at(i, j, k)],
            index[at(i - 1, j, k)],
          );
        if (here !== field[at(i, j, k + 1)] < 0)
          quad(
            index[at(i - 1, j - 1, k)],
            index[at(i, j - 1, k)],
            index[at(i, j, k)],
            index[at(i - 1, j, k)],
          );
      }
}
