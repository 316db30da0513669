// Light on one sample: finds the place on the triangle, its texture and relief, and adds up sun, sky,
// sheen, light through thin things, and the air in between.

import { colourOf, hasRelief, isThin, material, reliefOf } from './materials.mjs';
import { floatsPerVertex } from './mesh.mjs';
import { waterColour } from './water.mjs';

/** A number in [0, 1) for a pixel. */
export function pixelNoise(x, y, salt = 0) {
  let h = Math.imul(x, 0x27d4eb2d) ^ Math.imul(y, 0x165667b1) ^ Math.imul(salt + 1, 0x2545f491);
  h = Math.imul(h ^ (h >>> 15), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return ((h ^ (h >>> 16)) >>> 0) / 4294967296;
}

/**
 * @typedef {object} LitScene
 * @property {import('./mesh.mjs').Mesh} mesh @property {import('./sky.mjs').Sky} sky
 * @property {import('./sunlight.mjs').DepthMap[]} shadows from fine to coarse
 * @property {import('./sunlight.mjs').DepthMap} overhead
 * @property {{ density: number, mist?: number, mistHeightM?: number, tint?: number[] }} air
 * @property {number} penumbra in texels of the shadow map
 * @property {object} [water] @property {object} [reflection] @property {object} [occlusion]
 */

export class Shader {
  r = 0;
  g = 0;
  b = 0;
  /** Distance along the view axis of the last sample. */
  w = 0;
  s = {
    px: 0,
    py: 0,
    pz: 0,
    u: 0,
    v: 0,
    w: 0,
    footprint: 0,
    r: 0,
    g: 0,
    b: 0,
    gloss: 0,
    sharpness: 1,
    through: 0,
    scatter: 0,
    openness: 1,
  };
  #ambient = [0, 0, 0];
  #look = [0, 0, 0];
  #air = [0, 0, 0];
  #bary = new Float64Array(10); // three weights at the pixel, at x + 1, at y + 1
  #water = {
    px: 0,
    pz: 0,
    dx: 0,
    dy: 0,
    dz: 0,
    t: 0,
    w: 0,
    footprint: 0,
    noise: 0,
    sunOpen: 1,
    ambient: this.#ambient,
    out: [0, 0, 0],
    screenX: 0,
    screenY: 0,
  };

  /** @param {LitScene} scene @param {import('./camera.mjs').Camera} camera @param {boolean} [rough] leave out fine work */
  constructor(scene, camera, rough = false) {
    this.scene = scene;
    this.camera = camera;
    this.rough = rough;
    this.pixelAngle = 1 / camera.focalPx;
  }

  #rayOf(x, y, out) {
    const { right, up, forward, widthPx, heightPx, focalPx } = this.camera;
    const a = (x - widthPx / 2) / focalPx;
    const b = (heightPx / 2 - y) / focalPx;
    out[0] = forward[0] + a * right[0] + b * up[0];
    out[1] = forward[1] + a * right[1] + b * up[1];
    out[2] = forward[2] + a * right[2] + b * up[2];
  }

  #ray = [0, 0, 0];

  /** The sky at a pixel. */
  sampleSky(x, y) {
    const ray = this.#ray;
    this.#rayOf(x, y, ray);
    const k = 1 / Math.sqrt(ray[0] * ray[0] + ray[1] * ray[1] + ray[2] * ray[2]);
    this.scene.skyView.at(x, y, this.#look);
    [this.r, this.g, this.b] = this.#look;
    this.w = 0;
    this.#throughAir(ray[0] * k, ray[1] * k, ray[2] * k, 3000, this.camera.eye[1] + ray[1] * k * 3000, true);
  }

  /** Weights of the three corners where the ray through (x, y) meets the triangle's plane. */
  #meet(id, x, y, slot) {
    const ray = this.#ray;
    this.#rayOf(x, y, ray);
    const { mesh } = this.scene;
    const { eye } = this.camera;
    const p = mesh.vertices;
    const a = mesh.corners[id * 3] * floatsPerVertex;
    const b = mesh.corners[id * 3 + 1] * floatsPerVertex;
    const c = mesh.corners[id * 3 + 2] * floatsPerVertex;
    const e1x = p[b] - p[a];
    const e1y = p[b + 1] - p[a + 1];
    const e1z = p[b + 2] - p[a + 2];
    const e2x = p[c] - p[a];
    const e2y = p[c + 1] - p[a + 1];
    const e2z = p[c + 2] - p[a + 2];
    const hx = ray[1] * e2z - ray[2] * e2y;
    const hy = ray[2] * e2x - ray[0] * e2z;
    const hz = ray[0] * e2y - ray[1] * e2x;
    const k = 1 / (e1x * hx + e1y * hy + e1z * hz);
    const tx = eye[0] - p[a];
    const ty = eye[1] - p[a + 1];
    const tz = eye[2] - p[a + 2];
    let v = k * (tx * hx + ty * hy + tz * hz);
    const qx = ty * e1z - tz * e1y;
    const qy = tz * e1x - tx * e1z;
    const qz = tx * e1y - ty * e1x;
    let w = k * (ray[0] * qx + ray[1] * qy + ray[2] * qz);
    if (slot === 0) {
      // a sample just outside its triangle (an edge seen side on) is drawn back in
      if (!(v >= 0)) v = 0;
      else if (v > 1) v = 1;
      if (!(w >= 0)) w = 0;
      else if (w > 1 - v) w = 1 - v;
      this.#bary[9] = k * (e2x * qx + e2y * qy + e2z * qz);
    }
    const out = this.#bary;
    out[slot] = 1 - v - w;
    out[slot + 1] = v;
    out[slot + 2] = w;
  }

  /** Shades triangle `id` as seen through (x, y); result in r, g, b, w. */
  sample(id, x, y) {
    this.#meet(id, x, y, 0);
    const { scene, s } = this;
    const ray = this.#ray;
    const bary = this.#bary;
    const p = scene.mesh.vertices;
    const kind = scene.mesh.materials[id];
    const ia = scene.mesh.corners[id * 3] * floatsPerVertex;
    const ib = scene.mesh.corners[id * 3 + 1] * floatsPerVertex;
    const ic = scene.mesh.corners[id * 3 + 2] * floatsPerVertex;
    const a = bary[0];
    const b = bary[1];
    const c = bary[2];
    s.px = a * p[ia] + b * p[ib] + c * p[ic];
    s.py = a * p[ia + 1] + b * p[ib + 1] + c * p[ic + 1];
    s.pz = a * p[ia + 2] + b * p[ib + 2] + c * p[ic + 2];
    let nx = a * p[ia + 3] + b * p[ib + 3] + c * p[ic + 3];
    let ny = a * p[ia + 4] + b * p[ib + 4] + c * p[ic + 4];
    let nz = a * p[ia + 5] + b * p[ib + 5] + c * p[ic + 5];
    s.u = a * p[ia + 6] + b * p[ib + 6] + c * p[ic + 6];
    s.v = a * p[ia + 7] + b * p[ib + 7] + c * p[ic + 7];
    s.w = a * p[ia + 8] + b * p[ib + 8] + c * p[ic + 8];
    s.r = a * p[ia + 9] + b * p[ib + 9] + c * p[ic + 9];
    s.g = a * p[ia + 10] + b * p[ib + 10] + c * p[ic + 10];
    s.b = a * p[ia + 11] + b * p[ib + 11] + c * p[ic + 11];
    s.openness = a * p[ia + 12] + b * p[ib + 12] + c * p[ic + 12];
    const length = Math.sqrt(ray[0] * ray[0] + ray[1] * ray[1] + ray[2] * ray[2]);
    const dx = ray[0] / length;
    const dy = ray[1] / length;
    const dz = ray[2] / length;
    const { eye } = this.camera;
    const t = Math.sqrt((s.px - eye[0]) ** 2 + (s.py - eye[1]) ** 2 + (s.pz - eye[2]) ** 2);
    this.w = t / length;
    const k = 1 / Math.sqrt(nx * nx + ny * ny + nz * nz + 1e-12);
    nx *= k;
    ny *= k;
    nz *= k;
    let facing = -(nx * dx + ny * dy + nz * dz);
    if (facing < 0 && isThin[kind]) {
      nx = -nx;
      ny = -ny;
      nz = -nz;
      facing = -facing;
    }
    s.footprint = (t * this.pixelAngle) / Math.sqrt(Math.max(0.08, Math.abs(facing)));
    if (kind === material.water) return this.#shadeWater(x, y, dx, dy, dz, t);
    const flatX = nx;
    const flatY = ny;
    const flatZ = nz;
    if (hasRelief[kind] && !this.rough) {
      this.#bend(id, kind, x, y, ia, ib, ic, nx, ny, nz);
      nx = this.#bentX;
      ny = this.#bentY;
      nz = this.#bentZ;
    }
    colourOf(kind, s);
    this.#light(kind, x, y, dx, dy, dz, nx, ny, nz, flatX, flatY, flatZ);
    this.#throughAir(dx, dy, dz, t, s.py, false);
  }

  #bentX = 0;
  #bentY = 0;
  #bentZ = 0;

  /** Bends the normal by the relief's slope on the picture (Mikkelsen 2010). */
  #bend(id, kind, x, y, ia, ib, ic, nx, ny, nz) {
    const bary = this.#bary;
    const s = this.s;
    this.#meet(id, x + 1, y, 3);
    this.#meet(id, x, y + 1, 6);
    const p = this.scene.mesh.vertices;
    const da1 = bary[3] - bary[0];
    const db1 = bary[4] - bary[1];
    const dc1 = bary[5] - bary[2];
    const da2 = bary[6] - bary[0];
    const db2 = bary[7] - bary[1];
    const dc2 = bary[8] - bary[2];
    const xx = da1 * p[ia] + db1 * p[ib] + dc1 * p[ic];
    const xy = da1 * p[ia + 1] + db1 * p[ib + 1] + dc1 * p[ic + 1];
    const xz = da1 * p[ia + 2] + db1 * p[ib + 2] + dc1 * p[ic + 2];
    const yx = da2 * p[ia] + db2 * p[ib] + dc2 * p[ic];
    const yy = da2 * p[ia + 1] + db2 * p[ib + 1] + dc2 * p[ic + 1];
    const yz = da2 * p[ia + 2] + db2 * p[ib + 2] + dc2 * p[ic + 2];
    const h0 = reliefOf(kind, s.u, s.v, s.w, s.footprint);
    const hx =
      reliefOf(
        kind,
        s.u + da1 * p[ia + 6] + db1 * p[ib + 6] + dc1 * p[ic + 6],
        s.v + da1 * p[ia + 7] + db1 * p[ib + 7] + dc1 * p[ic + 7],
        s.w + da1 * p[ia + 8] + db1 * p[ib + 8] + dc1 * p[ic + 8],
        s.footprint,
      ) - h0;
    const hy =
      reliefOf(
        kind,
        s.u + da2 * p[ia + 6] + db2 * p[ib + 6] + dc2 * p[ic + 6],
        s.v + da2 * p[ia + 7] + db2 * p[ib + 7] + dc2 * p[ic + 7],
        s.w + da2 * p[ia + 8] + db2 * p[ib + 8] + dc2 * p[ic + 8],
        s.footprint,
      ) - h0;
    const r1x = yy * nz - yz * ny;
    const r1y = yz * nx - yx * nz;
    const r1z = yx * ny - yy * nx;
    const r2x = ny * xz - nz * xy;
    const r2y = nz * xx - nx * xz;
    const r2z = nx * xy - ny * xx;
    const det = xx * r1x + xy * r1y + xz * r1z;
    const sign = det < 0 ? -1 : 1;
    let bx = Math.abs(det) * nx - sign * (hx * r1x + hy * r2x);
    let by = Math.abs(det) * ny - sign * (hx * r1y + hy * r2y);
    let bz = Math.abs(det) * nz - sign * (hx * r1z + hy * r2z);
    const size = Math.sqrt(bx * bx + by * by + bz * bz);
    if (size > 1e-20) {
      bx /= size;
      by /= size;
      bz /= size;
      this.#bentX = bx;
      this.#bentY = by;
      this.#bentZ = bz;
    } else {
      this.#bentX = nx;
      this.#bentY = ny;
      this.#bentZ = nz;
    }
  }

  /** Share of the sun seen from the sample's place. */
  #sunOpen(x, y, nx, ny, nz) {
    const { s } = this;
    const { shadows, penumbra } = this.scene;
    const turn = pixelNoise(x * 2, y * 2) * 6.2832;
    for (let i = 0; i < shadows.length; i++) {
      const texel = 1 / shadows[i].texelsPerMetre;
      const lift = texel * 1.6;
      const spread = i === 0 ? penumbra : 1.3;
      const open = shadows[i].openness(
        s.px + nx * lift,
        s.py + ny * lift,
        s.pz + nz * lift,
        spread,
        texel * (0.8 + spread * 0.55),
        turn,
      );
      if (open >= 0) return open;
    }
    return 1;
  }

  #skyOpen(x, y) {
    const { s } = this;
    const { overhead, occlusion } = this.scene;
    let open = s.openness;
    if (!this.rough && occlusion) open *= occlusion.at(x, y);
    const above = overhead.openness(
      s.px,
      s.py + 0.04,
      s.pz,
      overhead.spreadM * overhead.texelsPerMetre,
      overhead.spreadM * 0.25,
      pixelNoise(x * 2, y * 2, 1) * 6.2832,
    );
    return above < 0 ? open : open * (0.36 + 0.64 * above);
  }

  #light(kind, x, y, dx, dy, dz, nx, ny, nz, flatX, flatY, flatZ) {
    const { s } = this;
    const { sky } = this.scene;
    const { sun, sunColour } = sky.settings;
    const ambient = this.#ambient;
    sky.shed(nx, ny, nz, ambient);
    const skyOpen = this.#skyOpen(x, y);
    const toSun = nx * sun[0] + ny * sun[1] + nz * sun[2];
    const flatToSun = flatX * sun[0] + flatY * sun[1] + flatZ * sun[2];
    let open = 0;
    if (flatToSun > -0.25 || s.through > 0) open = this.#sunOpen(x, y, flatX, flatY, flatZ);
    open *= Math.sqrt(s.openness);
    const front = toSun > 0 ? toSun : 0;
    const back = flatToSun < 0 ? -flatToSun * s.through : 0;
    const soft = s.scatter;
    const r = soft ? softened(toSun, 0.25) : front;
    const g = soft ? softened(toSun, 0.12) : front;
    const b = soft ? softened(toSun, 0.08) : front;
    // light passed on by the surroundings keeps hollows from going grey: a little of the own colour
    const bounce = 1 - skyOpen;
    this.r =
      s.r * (sunColour[0] * open * (r + back * 0.9) + ambient[0] * (skyOpen + bounce * skyOpen * s.r * 0.8));
    this.g = s.g * (sunColour[1] * open * (g + back) + ambient[1] * (skyOpen + bounce * skyOpen * s.g * 0.8));
    this.b =
      s.b * (sunColour[2] * open * (b + back * 0.45) + ambient[2] * (skyOpen + bounce * skyOpen * s.b * 0.8));
    if (s.gloss > 0) this.#sheen(kind, dx, dy, dz, nx, ny, nz, front * open, skyOpen);
  }

  #sheen(kind, dx, dy, dz, nx, ny, nz, sunlit, skyOpen) {
    const { s } = this;
    const { sky } = this.scene;
    const { sun, sunColour } = sky.settings;
    const facing = Math.max(0.03, -(nx * dx + ny * dy + nz * dz));
    const mirror =
      s.gloss +
      (1 - s.gloss) *
        (1 - facing) ** 5 *
        Math.min(1, s.sharpness / 60) *
        (kind === material.glass ? 1 : 0.55);
    if (sunlit > 0) {
      const hx = sun[0] - dx;
      const hy = sun[1] - dy;
      const hz = sun[2] - dz;
      const along = (nx * hx + ny * hy + nz * hz) / Math.sqrt(hx * hx + hy * hy + hz * hz);
      if (along > 0) {
        const k = s.gloss * ((s.sharpness + 8) / 8) * along ** s.sharpness * sunlit;
        this.r += sunColour[0] * k;
        this.g += sunColour[1] * k;
        this.b += sunColour[2] * k;
      }
    }
    if (s.sharpness < 30 && !s.scatter) return;
    const rx = dx + 2 * facing * nx;
    const ry = dy + 2 * facing * ny;
    const rz = dz + 2 * facing * nz;
    const k = 1 / Math.sqrt(rx * rx + ry * ry + rz * rz);
    sky.look(rx * k, ry * k, rz * k, this.#look);
    const share = mirror * skyOpen;
    this.r += (this.#look[0] - this.r) * share;
    this.g += (this.#look[1] - this.g) * share;
    this.b += (this.#look[2] - this.b) * share;
  }

  #shadeWater(x, y, dx, dy, dz, t) {
    const { s, scene } = this;
    const at = this.#water;
    at.px = s.px;
    at.pz = s.pz;
    at.dx = dx;
    at.dy = dy;
    at.dz = dz;
    at.t = t;
    at.w = this.w;
    at.footprint = t * this.pixelAngle;
    at.noise = pixelNoise(Math.floor(x), Math.floor(y), 3);
    at.screenX = x;
    at.screenY = y;
    scene.sky.shed(0, 1, 0, this.#ambient);
    at.sunOpen = this.#sunOpen(x, y, 0, 1, 0);
    waterColour(scene, at);
    [this.r, this.g, this.b] = at.out;
    this.#throughAir(dx, dy, dz, t, 0, false);
  }

  /** Haze that thickens with distance, and mist that lies low over the river. */
  #throughAir(dx, dy, dz, t, y, isSky) {
    const { air, sky } = this.scene;
    let thickness = isSky ? 0 : air.density * t;
    if (air.mist) {
      const h = air.mistHeightM ?? 3;
      const y0 = Math.max(0, Math.abs(this.camera.eye[1]));
      const y1 = Math.max(0, Math.abs(y));
      const rise = (y1 - y0) / h;
      const mean = Math.abs(rise) < 0.01 ? Math.exp(-y0 / h) : (Math.exp(-y0 / h) - Math.exp(-y1 / h)) / rise;
      thickness += air.mist * t * mean;
    }
    if (thickness <= 0) return;
    const keep = Math.exp(-thickness);
    const colour = this.#air;
    const flat = Math.sqrt(dx * dx + dz * dz) || 1e-6;
    sky.look((dx / flat) * 0.996, 0.087, (dz / flat) * 0.996, colour);
    const tint = air.tint;
    this.r = this.r * keep + colour[0] * (tint ? tint[0] : 1) * (1 - keep);
    this.g = this.g * keep + colour[1] * (tint ? tint[1] : 1) * (1 - keep);
    this.b = this.b * keep + colour[2] * (tint ? tint[2] : 1) * (1 - keep);
  }
}

function softened(x, wrap) {
  const y = (x + wrap) / (1 + wrap);
  return y > 0 ? y * y * 0.35 + y * 0.65 : 0;
}
