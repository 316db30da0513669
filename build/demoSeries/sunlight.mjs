// Depth maps seen from the sun (shadows) and from straight above (how much sky a place sees).

import { unit } from './camera.mjs';
import { floatsPerVertex } from './mesh.mjs';
import { squareTo } from './solids.mjs';
import { fillTriangle } from './visibility.mjs';

const far = 4096;
const taps = Array.from({ length: 12 }, (_, i) => {
  const r = Math.sqrt((i + 0.5) / 12);
  return [r * Math.cos(i * 2.39996), r * Math.sin(i * 2.39996)];
}).flat();

export class DepthMap {
  /**
   * @param {import('./mesh.mjs').Mesh} mesh
   * @param {[number, number, number]} towardsLight
   * @param {[number, number, number]} centre @param {number} radiusM @param {number} sizePx
   * @param {(material: number) => boolean} casts @param {boolean} [nearOnly] leave out the distance
   */
  constructor(mesh, towardsLight, centre, radiusM, sizePx, casts, nearOnly = false) {
    this.light = unit(towardsLight);
    [this.a, this.b] = squareTo(this.light);
    this.centre = centre;
    this.size = sizePx;
    this.texelsPerMetre = sizePx / (2 * radiusM);
    this.depth = new Float32Array(sizePx * sizePx);
    const count = nearOnly ? Math.min(mesh.vertexCount, mesh.nearVertices) : mesh.vertexCount;
    const triangles = nearOnly ? Math.min(mesh.triangleCount, mesh.nearTriangles) : mesh.triangleCount;
    const sx = new Float32Array(count);
    const sy = new Float32Array(count);
    const sd = new Float32Array(count);
    for (let i = 0, at = 0; i < count; i++, at += floatsPerVertex) {
      this.#place(mesh.vertices[at], mesh.vertices[at + 1], mesh.vertices[at + 2]);
      sx[i] = this.x;
      sy[i] = this.y;
      sd[i] = this.d;
    }
    const target = { width: sizePx, top: 0, rows: sizePx, depth: this.depth, ids: null };
    for (let t = 0; t < triangles; t++) {
      if (!casts(mesh.materials[t])) continue;
      const [p, q, r] = [mesh.corners[t * 3], mesh.corners[t * 3 + 1], mesh.corners[t * 3 + 2]];
      fillTriangle(target, sx[p], sy[p], sd[p], sx[q], sy[q], sd[q], sx[r], sy[r], sd[r], t);
    }
  }

  x = 0;
  y = 0;
  d = 0;

  #place(px, py, pz) {
    const x = px - this.centre[0];
    const y = py - this.centre[1];
    const z = pz - this.centre[2];
    const half = this.size / 2;
    this.x = half + this.texelsPerMetre * (x * this.a[0] + y * this.a[1] + z * this.a[2]);
    this.y = half + this.texelsPerMetre * (x * this.b[0] + y * this.b[1] + z * this.b[2]);
    this.d = far + x * this.light[0] + y * this.light[1] + z * this.light[2];
  }

  /**
   * Share of the light's disc that a place sees, 0…1; −1 outside the map.
   * @param {number} spreadTexels @param {number} turnRad turns the taps, pixel by pixel
   */
  openness(px, py, pz, spreadTexels, biasM, turnRad) {
    this.#place(px, py, pz);
    const { x, y, size } = this;
    if (x < 1 || y < 1 || x >= size - 1 || y >= size - 1) return -1;
    const limit = this.d + biasM;
    const c = Math.cos(turnRad) * spreadTexels;
    const s = Math.sin(turnRad) * spreadTexels;
    let open = 0;
    for (let i = 0; i < 24; i += 2) {
      let tx = (x + taps[i] * c - taps[i + 1] * s) | 0;
      let ty = (y + taps[i] * s + taps[i + 1] * c) | 0;
      if (tx < 0) tx = 0;
      else if (tx >= size) tx = size - 1;
      if (ty < 0) ty = 0;
      else if (ty >= size) ty = size - 1;
      if (this.depth[ty * size + tx] <= limit) open++;
    }
    return open / 12;
  }
}
