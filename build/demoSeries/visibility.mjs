// Which triangle each sample of the picture sees. Nothing is shaded here, so overdraw costs little, and
// a band of rows at a time keeps the memory small at any picture size.

import { floatsPerVertex } from './mesh.mjs';

const nearM = 0.05;

/**
 * @typedef {object} Target
 * @property {number} width @property {number} top first row @property {number} rows
 * @property {Float32Array} depth larger is nearer; 0 where nothing is seen
 * @property {Int32Array | null} ids triangle, −1 where nothing is seen
 */

/** Fills one triangle, keeping the nearest. `d` grows towards the viewer and is linear on the picture. */
export function fillTriangle(target, x0, y0, d0, x1, y1, d1, x2, y2, d2, id) {
  const area = (x1 - x0) * (y2 - y0) - (x2 - x0) * (y1 - y0);
  if (!(Math.abs(area) > 0)) return;
  const yLow = Math.min(y0, y1, y2);
  const yHigh = Math.max(y0, y1, y2);
  const first = Math.max(target.top, Math.ceil(yLow - 0.5));
  const last = Math.min(target.top + target.rows - 1, Math.floor(yHigh - 0.5));
  if (first > last) return;
  const xLow = Math.min(x0, x1, x2);
  const xHigh = Math.max(x0, x1, x2);
  if (xHigh < 0 || xLow > target.width) return;
  const gx = ((d1 - d0) * (y2 - y0) - (d2 - d0) * (y1 - y0)) / area;
  const gy = ((d2 - d0) * (x1 - x0) - (d1 - d0) * (x2 - x0)) / area;
  const { width, depth, ids, top } = target;
  const s01 = (x1 - x0) / (y1 - y0);
  const s12 = (x2 - x1) / (y2 - y1);
  const s20 = (x0 - x2) / (y0 - y2);
  for (let y = first; y <= last; y++) {
    const yc = y + 0.5;
    let left = Infinity;
    let right = -Infinity;
    if (yc >= y0 !== yc >= y1) {
      const x = x0 + (yc - y0) * s01;
      if (x < left) left = x;
      if (x > right) right = x;
    }
    if (yc >= y1 !== yc >= y2) {
      const x = x1 + (yc - y1) * s12;
      if (x < left) left = x;
      if (x > right) right = x;
    }
    if (yc >= y2 !== yc >= y0) {
      const x = x2 + (yc - y2) * s20;
      if (x < left) left = x;
      if (x > right) right = x;
    }
    let xs = Math.ceil(left - 0.5);
    let xe = Math.floor(right - 0.5);
    if (xs < 0) xs = 0;
    if (xe >= width) xe = width - 1;
    if (xs > xe) continue;
    let d = d0 + gx * (xs + 0.5 - x0) + gy * (yc - y0);
    let at = (y - top) * width + xs;
    if (ids)
      for (let x = xs; x <= xe; x++, at++, d += gx) {
        if (d > depth[at]) {
          depth[at] = d;
          ids[at] = id;
        }
      }
    else
      for (let x = xs; x <= xe; x++, at++, d += gx) {
        if (d > depth[at]) depth[at] = d;
      }
  }
}

/** Screen place and inverse distance of every vertex, on a grid `grid` times finer than the pixels. */
function project(mesh, camera, grid, count) {
  const { eye, right, up, forward } = camera;
  const sx = new Float32Array(count);
  const sy = new Float32Array(count);
  const inverse = new Float32Array(count);
  const focal = camera.focalPx * grid;
  const cx = (camera.widthPx * grid) / 2;
  const cy = (camera.heightPx * grid) / 2;
  const store = mesh.vertices;
  for (let i = 0, at = 0; i < count; i++, at += floatsPerVertex) {
    const x = store[at] - eye[0];
    const y = store[at + 1] - eye[1];
    const z = store[at + 2] - eye[2];
    const w = x * forward[0] + y * forward[1] + z * forward[2];
    if (w < nearM) {
      inverse[i] = -1;
      continue;
    }
    const k = 1 / w;
    inverse[i] = k;
    sx[i] = cx + focal * k * (x * right[0] + y * right[1] + z * right[2]);
    sy[i] = cy - focal * k * (x * up[0] + y * up[1] + z * up[2]);
  }
  return { sx, sy, inverse, focal, cx, cy };
}

export class Visibility {
  /**
   * @param {import('./mesh.mjs').Mesh} mesh
   * @param {import('./camera.mjs').Camera} camera
   * @param {{ grid?: number, aboveWaterOnly?: boolean, bandRows?: number, nearOnly?: boolean }} [options] rows in samples
   */
  constructor(mesh, camera, { grid = 1, aboveWaterOnly = false, bandRows = 64, nearOnly = false } = {}) {
    this.mesh = mesh;
    this.camera = camera;
    this.aboveWaterOnly = aboveWaterOnly;
    this.width = camera.widthPx * grid;
    this.height = camera.heightPx * grid;
    this.bandRows = bandRows;
    this.triangleCount = nearOnly ? Math.min(mesh.triangleCount, mesh.nearTriangles) : mesh.triangleCount;
    const vertexCount = nearOnly ? Math.min(mesh.vertexCount, mesh.nearVertices) : mesh.vertexCount;
    this.projected = project(mesh, camera, grid, vertexCount);
    this.#sortIntoBands();
  }

  #first = 0;
  #last = -1;

  /** Finds the rows a triangle can touch; none when it is out of sight. */
  #findRows(triangle) {
    const { corners, vertices } = this.mesh;
    const { sx, sy, inverse } = this.projected;
    const a = corners[triangle * 3];
    const b = corners[triangle * 3 + 1];
    const c = corners[triangle * 3 + 2];
    this.#first = 0;
    this.#last = -1;
    if (
      this.aboveWaterOnly &&
      vertices[a * floatsPerVertex + 1] <= 0 &&
      vertices[b * floatsPerVertex + 1] <= 0 &&
      vertices[c * floatsPerVertex + 1] <= 0
    )
      return;
    const behind = (inverse[a] < 0 ? 1 : 0) + (inverse[b] < 0 ? 1 : 0) + (inverse[c] < 0 ? 1 : 0);
    if (behind === 3) return;
    if (behind === 0) {
      if (sx[a] < 0 && sx[b] < 0 && sx[c] < 0) return;
      if (sx[a] > this.width && sx[b] > this.width && sx[c] > this.width) return;
      this.#first = Math.max(0, Math.ceil(Math.min(sy[a], sy[b], sy[c]) - 0.5));
      this.#last = Math.min(this.height - 1, Math.floor(Math.max(sy[a], sy[b], sy[c]) - 0.5));
    } else this.#last = this.height - 1;
  }

  #sortIntoBands() {
    const bands = Math.ceil(this.height / this.bandRows);
    const starts = new Uint32Array(bands + 1);
    const count = this.triangleCount;
    const low = new Uint16Array(count);
    const high = new Uint16Array(count);
    for (let i = 0; i < count; i++) {
      this.#findRows(i);
      const seen = this.#first <= this.#last;
      low[i] = seen ? Math.floor(this.#first / this.bandRows) : 1;
      high[i] = seen ? Math.floor(this.#last / this.bandRows) : 0;
      for (let band = low[i]; band <= high[i]; band++) starts[band + 1]++;
    }
    for (let band = 0; band < bands; band++) starts[band + 1] += starts[band];
    const members = new Uint32Array(starts[bands]);
    const next = starts.slice();
    for (let i = 0; i < count; i++)
      for (let band = low[i]; band <= high[i]; band++) members[next[band]++] = i;
    this.starts = starts;
    this.members = members;
    this.target = {
      width: this.width,
      top: 0,
      rows: this.bandRows,
      depth: new Float32Array(this.width * this.bandRows),
      ids: new Int32Array(this.width * this.bandRows),
    };
  }

  get bandCount() {
    return this.starts.length - 1;
  }

  /** Draws one band; the target returned is reused by the next call. @returns {Target} */
  drawBand(band) {
    const { target, members, starts, mesh } = this;
    const { sx, sy, inverse } = this.projected;
    target.top = band * this.bandRows;
    target.rows = Math.min(this.bandRows, this.height - target.top);
    target.depth.fill(0);
    target.ids.fill(-1);
    const { corners, vertices } = mesh;
    for (let k = starts[band]; k < starts[band + 1]; k++) {
      const id = members[k];
      const a = corners[id * 3];
      const b = corners[id * 3 + 1];
      const c = corners[id * 3 + 2];
      const cut =
        inverse[a] < 0 ||
        inverse[b] < 0 ||
        inverse[c] < 0 ||
        (this.aboveWaterOnly &&
          (vertices[a * floatsPerVertex + 1] < 0 ||
            vertices[b * floatsPerVertex + 1] < 0 ||
            vertices[c * floatsPerVertex + 1] < 0));
      if (cut) this.#fillClipped(target, id, [a, b, c]);
      else
        fillTriangle(
          target,
          sx[a],
          sy[a],
          inverse[a],
          sx[b],
          sy[b],
          inverse[b],
          sx[c],
          sy[c],
          inverse[c],
          id,
        );
    }
    return target;
  }

  #fillClipped(target, id, corners) {
    const { eye, right, up, forward } = this.camera;
    const { focal, cx, cy } = this.projected;
    let polygon = corners.map((i) => {
      const at = i * floatsPerVertex;
      const world = this.mesh.vertices;
      const p = [world[at] - eye[0], world[at + 1] - eye[1], world[at + 2] - eye[2]];
      const along = (axis) => p[0] * axis[0] + p[1] * axis[1] + p[2] * axis[2];
      return [along(right), along(up), along(forward), world[at + 1]];
    });
    polygon = clip(polygon, (p) => p[2] - nearM);
    if (this.aboveWaterOnly) polygon = clip(polygon, (p) => p[3]);
    const flat = polygon.map(([x, y, w]) => [cx + (focal * x) / w, cy - (focal * y) / w, 1 / w]);
    for (let i = 2; i < flat.length; i++) fillTriangle(target, ...flat[0], ...flat[i - 1], ...flat[i], id);
  }
}

function clip(polygon, inside) {
  const out = [];
  for (let i = 0; i < polygon.length; i++) {
    const a = polygon[i];
    const b = polygon[(i + 1) % polygon.length];
    const [da, db] = [inside(a), inside(b)];
    if (da >= 0) out.push(a);
    if (da >= 0 !== db >= 0) {
      const t = da / (da - db);
      out.push(a.map((value, axis) => value + (b[axis] - value) * t));
    }
  }
  return out;
}
