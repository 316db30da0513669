// A growing triangle mesh and the few ways of adding to it that the scene needs.

/** @typedef {[number, number, number]} Triple */
/** @typedef {{ m: number[], t: Triple }} Placing rotation and scale (row-major 3×3) and shift */

const floatsPerVertex = 13; // position, normal, texture place, colour, openness to the sky

/**
 * @param {Triple} shift
 * @param {number} [yawRad] turn about the vertical
 * @param {number} [scale]
 * @param {number} [pitchRad] turn about the x axis, before the yaw
 * @param {number} [rollRad] turn about the z axis, before the pitch
 * @returns {Placing}
 */
export function placing(shift, yawRad = 0, scale = 1, pitchRad = 0, rollRad = 0) {
  const [cy, sy] = [Math.cos(yawRad), Math.sin(yawRad)];
  const [cp, sp] = [Math.cos(pitchRad), Math.sin(pitchRad)];
  const [cr, sr] = [Math.cos(rollRad), Math.sin(rollRad)];
  const m = [
    cy * cr + sy * sp * sr,
    -cy * sr + sy * sp * cr,
    sy * cp,
    cp * sr,
    cp * cr,
    -sp,
    -sy * cr + cy * sp * sr,
    sy * sr + cy * sp * cr,
    cy * cp,
  ];
  return { m: m.map((value) => value * scale), t: shift };
}

/** Where a placing puts a point. @returns {Triple} */
export function placePoint({ m, t }, [x, y, z]) {
  return [
    m[0] * x + m[1] * y + m[2] * z + t[0],
    m[3] * x + m[4] * y + m[5] * z + t[1],
    m[6] * x + m[7] * y + m[8] * z + t[2],
  ];
}

/** First `outer`'s placing, applied after `inner`. @returns {Placing} */
export function placeWithin(outer, inner) {
  const [a, b] = [outer.m, inner.m];
  const m = [];
  for (let row = 0; row < 3; row++)
    for (let col = 0; col < 3; col++)
      m.push(a[row * 3] * b[col] + a[row * 3 + 1] * b[3 + col] + a[row * 3 + 2] * b[6 + col]);
  return { m, t: placePoint(outer, inner.t) };
}

/** A colour lighter or darker by a factor. @returns {Triple} */
export const toned = ([r, g, b], factor) => [r * factor, g * factor, b * factor];

export class Mesh {
  vertexCount = 0;
  triangleCount = 0;
  /** @param {number} [vertices] room to begin with @param {number} [triangles] */
  constructor(vertices = 4096, triangles = 8192) {
    this.vertices = new Float32Array(floatsPerVertex * vertices);
    this.corners = new Uint32Array(3 * triangles);
    this.materials = new Uint8Array(triangles);
  }

  /** Colour given to vertices that follow. @type {Triple} */
  colour = [0.5, 0.5, 0.5];
  openness = 1;
  nearVertices = Infinity;
  nearTriangles = Infinity;
  /** @type {Placing | null} */
  place = null;

  /** Adds a vertex; its normal need not be of unit length. @returns {number} its index */
  vertex(x, y, z, nx, ny, nz, u, v, w) {
    if ((this.vertexCount + 1) * floatsPerVertex > this.vertices.length)
      this.#growVertices(this.vertexCount + 1);
    if (this.place) {
      const { m, t } = this.place;
      const px = x;
      const py = y;
      const qx = nx;
      const qy = ny;
      x = m[0] * px + m[1] * py + m[2] * z + t[0];
      y = m[3] * px + m[4] * py + m[5] * z + t[1];
      z = m[6] * px + m[7] * py + m[8] * z + t[2];
      nx = m[0] * qx + m[1] * qy + m[2] * nz;
      ny = m[3] * qx + m[4] * qy + m[5] * nz;
      nz = m[6] * qx + m[7] * qy + m[8] * nz;
    }
    const length = Math.sqrt(nx * nx + ny * ny + nz * nz) || 1;
    const at = this.vertexCount * floatsPerVertex;
    const store = this.vertices;
    store[at] = x;
    store[at + 1] = y;
    store[at + 2] = z;
    store[at + 3] = nx / length;
    store[at + 4] = ny / length;
    store[at + 5] = nz / length;
    store[at + 6] = u;
    store[at + 7] = v;
    store[at + 8] = w;
    store[at + 9] = this.colour[0];
    store[at + 10] = this.colour[1];
    store[at + 11] = this.colour[2];
    store[at + 12] = this.openness;
    return this.vertexCount++;
  }

  #growTriangles(count) {
    if (count <= this.materials.length) return;
    const size = Math.max(this.materials.length * 2, count);
    const corners = new Uint32Array(size * 3);
    corners.set(this.corners);
    this.corners = corners;
    const materials = new Uint8Array(size);
    materials.set(this.materials);
    this.materials = materials;
  }

  #growVertices(count) {
    if (count * floatsPerVertex <= this.vertices.length) return;
    const grown = new Float32Array(Math.max(this.vertices.length * 2, count * floatsPerVertex));
    grown.set(this.vertices);
    this.vertices = grown;
  }

  triangle(a, b, c, material) {
    this.#growTriangles(this.triangleCount + 1);
    const at = this.triangleCount * 3;
    this.corners[at] = a;
    this.corners[at + 1] = b;
    this.corners[at + 2] = c;
    this.materials[this.triangleCount++] = material;
  }

  quad(a, b, c, d, material) {
    this.triangle(a, b, c, material);
    this.triangle(a, c, d, material);
  }

  /**
   * Adds another mesh's triangles, placed anew.
   * @param {Mesh} other
   * @param {Placing} [where]
   * @param {Triple} [tint] multiplies the colours
   */
  add(other, where, tint = [1, 1, 1]) {
    const place = this.place && where ? placeWithin(this.place, where) : (where ?? this.place);
    const first = this.vertexCount;
    const floats = other.vertexCount * floatsPerVertex;
    this.#growVertices(first + other.vertexCount);
    const to = this.vertices.subarray(first * floatsPerVertex, first * floatsPerVertex + floats);
    to.set(other.vertices.subarray(0, floats));
    this.vertexCount += other.vertexCount;
    for (let at = 0; at < floats; at += floatsPerVertex) {
      to[at + 9] *= tint[0];
      to[at + 10] *= tint[1];
      to[at + 11] *= tint[2];
    }
    if (place) placeVertices(to, place);
    const c = other.corners;
    const from = this.triangleCount;
    this.#growTriangles(from + other.triangleCount);
    for (let i = 0; i < other.triangleCount * 3; i++) this.corners[from * 3 + i] = first + c[i];
    this.materials.set(other.materials.subarray(0, other.triangleCount), from);
    this.triangleCount += other.triangleCount;
  }

  /** Everything added from here on stands too far off to throw shadows on what came before. */
  beginDistance() {
    this.nearVertices = this.vertexCount;
    this.nearTriangles = this.triangleCount;
  }
}

/** Places and turns a run of vertices; the scale goes out of the normals again. */
function placeVertices(v, { m, t }) {
  for (let at = 0; at < v.length; at += floatsPerVertex) {
    const [x, y, z] = [v[at], v[at + 1], v[at + 2]];
    v[at] = m[0] * x + m[1] * y + m[2] * z + t[0];
    v[at + 1] = m[3] * x + m[4] * y + m[5] * z + t[1];
    v[at + 2] = m[6] * x + m[7] * y + m[8] * z + t[2];
    const nx = m[0] * v[at + 3] + m[1] * v[at + 4] + m[2] * v[at + 5];
    const ny = m[3] * v[at + 3] + m[4] * v[at + 4] + m[5] * v[at + 5];
    const nz = m[6] * v[at + 3] + m[7] * v[at + 4] + m[8] * v[at + 5];
    const length = Math.sqrt(nx * nx + ny * ny + nz * nz) || 1;
    v[at + 3] = nx / length;
    v[at + 4] = ny / length;
    v[at + 5] = nz / length;
  }
}

export { floatsPerVertex };
