// Boxes, tubes, sheets, ribbons and turned shapes, added to a mesh.

/** @typedef {import('./mesh.mjs').Mesh} Mesh */
/** @typedef {import('./mesh.mjs').Triple} Triple */

const faces = [
  [0, 1, 2],
  [0, -1, 2],
  [1, 1, 0],
  [1, -1, 0],
  [2, 1, 1],
  [2, -1, 1],
];

/**
 * A box between two corners. Texture places are metres along the box, shifted by `grainSeed` so that
 * no two boards carry the same grain; u runs along the longest side.
 * @param {Mesh} mesh @param {Triple} low @param {Triple} high
 * @param {number} material @param {number} [grainSeed]
 */
export function addBox(mesh, low, high, material, grainSeed = 0) {
  const size = [high[0] - low[0], high[1] - low[1], high[2] - low[2]];
  const longest = size[0] >= size[1] && size[0] >= size[2] ? 0 : size[1] >= size[2] ? 1 : 2;
  for (const [axis, sign] of faces) {
    const a = (axis + 1) % 3;
    const b = (axis + 2) % 3;
    const index = [];
    for (const [s, t] of [
      [0, 0],
      [1, 0],
      [1, 1],
      [0, 1],
    ]) {
      const p = [0, 0, 0];
      p[axis] = sign > 0 ? high[axis] : low[axis];
      p[a] = s ? high[a] : low[a];
      p[b] = t ? high[b] : low[b];
      const n = [0, 0, 0];
      n[axis] = sign;
      const along = p[longest];
      const across = p[(longest + 1) % 3];
      const deep = p[(longest + 2) % 3];
      index.push(
        mesh.vertex(
          p[0],
          p[1],
          p[2],
          n[0],
          n[1],
          n[2],
          along + grainSeed * 3.7,
          across + grainSeed * 1.9,
          deep + grainSeed * 5.3,
        ),
      );
    }
    mesh.quad(index[0], index[1], index[2], index[3], material);
  }
}

/** Unit vectors square to a direction. @returns {[Triple, Triple]} */
export function squareTo([x, y, z]) {
  const up = Math.abs(y) < 0.9 * Math.hypot(x, y, z) ? [0, 1, 0] : [1, 0, 0];
  let ax = up[1] * z - up[2] * y;
  let ay = up[2] * x - up[0] * z;
  let az = up[0] * y - up[1] * x;
  const la = Math.hypot(ax, ay, az) || 1;
  ax /= la;
  ay /= la;
  az /= la;
  let bx = y * az - z * ay;
  let by = z * ax - x * az;
  let bz = x * ay - y * ax;
  const lb = Math.hypot(bx, by, bz) || 1;
  bx /= lb;
  by /= lb;
  bz /= lb;
  return [
    [ax, ay, az],
    [bx, by, bz],
  ];
}

/**
 * A tube along a path. u is metres along, v metres around, w the seed.
 * @param {Mesh} mesh @param {Triple[]} path
 * @param {number | ((share: number, angleRad: number) => number)} radius
 * @param {number} sides @param {number} material @param {{ seed?: number, capped?: boolean }} [options]
 */
export function addTube(mesh, path, radius, sides, material, { seed = 0, capped = true } = {}) {
  const radiusAt = typeof radius === 'function' ? radius : () => radius;
  let along = 0;
  let previous = -1;
  for (let i = 0; i < path.length; i++) {
    const before = path[Math.max(0, i - 1)];
    const after = path[Math.min(path.length - 1, i + 1)];
    const [a, b] = squareTo([after[0] - before[0], after[1] - before[1], after[2] - before[2]]);
    if (i > 0) along += Math.hypot(path[i][0] - before[0], path[i][1] - before[1], path[i][2] - before[2]);
    const first = mesh.vertexCount;
    for (let s = 0; s <= sides; s++) {
      const angle = (s / sides) * Math.PI * 2;
      const r = radiusAt(i / (path.length - 1), angle);
      const nx = a[0] * Math.cos(angle) + b[0] * Math.sin(angle);
      const ny = a[1] * Math.cos(angle) + b[1] * Math.sin(angle);
      const nz = a[2] * Math.cos(angle) + b[2] * Math.sin(angle);
      mesh.vertex(
        path[i][0] + nx * r,
        path[i][1] + ny * r,
        path[i][2] + nz * r,
        nx,
        ny,
        nz,
        along,
        angle * r,
        seed,
      );
    }
    if (previous >= 0)
      for (let s = 0; s < sides; s++)
        mesh.quad(previous + s, previous + s + 1, first + s + 1, first + s, material);
    if (capped && (i === 0 || i === path.length - 1)) addCap(mesh, path, i, first, sides, material, seed);
    previous = first;
  }
}

function addCap(mesh, path, i, first, sides, material, seed) {
  const other = path[i === 0 ? 1 : i - 1];
  const n = [path[i][0] - other[0], path[i][1] - other[1], path[i][2] - other[2]];
  const centre = mesh.vertex(path[i][0], path[i][1], path[i][2], n[0], n[1], n[2], 0, 0, seed);
  for (let s = 0; s < sides; s++) mesh.triangle(centre, first + s, first + s + 1, material);
}

/**
 * A sheet given point by point over (0…1)²; normals follow its form.
 * @param {Mesh} mesh @param {number} columns @param {number} rows
 * @param {(s: number, t: number) => Triple} point
 * @param {number} material
 * @param {{ place?: (s: number, t: number) => Triple, colour?: (s: number, t: number, p: Triple) => Triple, openness?: (s: number, t: number, p: Triple) => number }} [options]
 */
export function addSheet(mesh, columns, rows, point, material, { place, colour, openness } = {}) {
  const grid = [];
  for (let j = 0; j <= rows; j++) for (let i = 0; i <= columns; i++) grid.push(point(i / columns, j / rows));
  const first = mesh.vertexCount;
  const at = (i, j) =>
    grid[Math.min(rows, Math.max(0, j)) * (columns + 1) + Math.min(columns, Math.max(0, i))];
  const [heldColour, heldOpenness] = [mesh.colour, mesh.openness];
  for (let j = 0; j <= rows; j++)
    for (let i = 0; i <= columns; i++) {
      const [e, w, s, n] = [at(i + 1, j), at(i - 1, j), at(i, j + 1), at(i, j - 1)];
      const ax = e[0] - w[0];
      const ay = e[1] - w[1];
      const az = e[2] - w[2];
      const bx = s[0] - n[0];
      const by = s[1] - n[1];
      const bz = s[2] - n[2];
      const p = at(i, j);
      const uvw = place ? place(i / columns, j / rows) : p;
      if (colour) mesh.colour = colour(i / columns, j / rows, p);
      if (openness) mesh.openness = openness(i / columns, j / rows, p);
      mesh.vertex(
        p[0],
        p[1],
        p[2],
        ay * bz - az * by,
        az * bx - ax * bz,
        ax * by - ay * bx,
        uvw[0],
        uvw[1],
        uvw[2],
      );
    }
  for (let j = 0; j < rows; j++)
    for (let i = 0; i < columns; i++) {
      const a = first + j * (columns + 1) + i;
      mesh.quad(a, a + 1, a + columns + 2, a + columns + 1, material);
    }
  [mesh.colour, mesh.openness] = [heldColour, heldOpenness];
}

/**
 * A flat ribbon along a path, tapering; for blades, leaves, strands and feathers. Its normal is
 * square to the path and to `side`. u is metres along, v −1…1 across, w the seed.
 * @param {Mesh} mesh @param {Triple[]} path @param {Triple} side unit vector across the ribbon
 * @param {(share: number) => number} halfWidth @param {number} material
 * @param {{ seed?: number, tint?: (share: number) => [Triple, number] }} [options]
 */
export function addRibbon(mesh, path, side, halfWidth, material, { seed = 0, tint } = {}) {
  let along = 0;
  let previous = -1;
  for (let i = 0; i < path.length; i++) {
    const before = path[Math.max(0, i - 1)];
    const after = path[Math.min(path.length - 1, i + 1)];
    const dx = after[0] - before[0];
    const dy = after[1] - before[1];
    const dz = after[2] - before[2];
    if (i > 0) along += Math.hypot(path[i][0] - before[0], path[i][1] - before[1], path[i][2] - before[2]);
    const nx = dy * side[2] - dz * side[1];
    const ny = dz * side[0] - dx * side[2];
    const nz = dx * side[1] - dy * side[0];
    const share = i / (path.length - 1);
    const h = halfWidth(share);
    if (tint) [mesh.colour, mesh.openness] = tint(share);
    const p = path[i];
    const a = mesh.vertex(
      p[0] - side[0] * h,
      p[1] - side[1] * h,
      p[2] - side[2] * h,
      nx,
      ny,
      nz,
      along,
      -1,
      seed,
    );
    mesh.vertex(p[0] + side[0] * h, p[1] + side[1] * h, p[2] + side[2] * h, nx, ny, nz, along, 1, seed);
    if (previous >= 0) mesh.quad(previous, previous + 1, a + 1, a, material);
    previous = a;
  }
}

/**
 * A shape turned about the y axis.
 * @param {Mesh} mesh @param {[number, number][]} profile radius and height, from bottom to top
 * @param {number} sides @param {number} material
 * @param {(p: Triple, angleRad: number) => Triple} [bend] moves each point
 */
export function addTurned(mesh, profile, sides, material, bend = (p) => p) {
  addSheet(
    mesh,
    sides,
    profile.length - 1,
    (s, t) => {
      const [r, y] = profile[Math.round(t * (profile.length - 1))];
      const angle = -s * Math.PI * 2;
      return bend([Math.cos(angle) * r, y, Math.sin(angle) * r], angle);
    },
    material,
  );
}

/** Points of a smooth curve through given points (Catmull–Rom). @returns {Triple[]} */
export function curveThrough(points, perSpan) {
  const out = [];
  const at = (i) => points[Math.min(points.length - 1, Math.max(0, i))];
  for (let i = 0; i < points.length - 1; i++) {
    const [a, b, c, d] = [at(i - 1), at(i), at(i + 1), at(i + 2)];
    for (let k = 0; k < perSpan; k++) {
      const t = k / perSpan;
      out.push(
        [0, 1, 2].map((axis) => {
          const [p, q, r, s] = [a[axis], b[axis], c[axis], d[axis]];
          return (
            0.5 *
            (2 * q + (r - p) * t + (2 * p - 5 * q + 4 * r - s) * t * t + (3 * q - p - 3 * r + s) * t * t * t)
          );
        }),
      );
    }
  }
  out.push(at(points.length - 1));
  return out;
}
