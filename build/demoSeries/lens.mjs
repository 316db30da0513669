// The lens: out-of-focus blur by distance, a little flare, darker corners.

/**
 * @typedef {object} LensSettings
 * @property {number} focusM distance in focus
 * @property {number} [blurShare] diameter of the blur of a far point, as a share of the long edge
 * @property {number} [flare] share of the light spread widely
 * @property {number} [falloff] darkening of the corners, 0…1
 */

/** Reduces by whole factors; distance keeps the nearest share so that edges stay where they are. */
function reduce({ rgb, depth, width, height }, factor) {
  const w = Math.ceil(width / factor);
  const h = Math.ceil(height / factor);
  const out = { rgb: new Float32Array(w * h * 3), depth: new Float32Array(w * h), width: w, height: h };
  for (let y = 0; y < h; y++)
    for (let x = 0; x < w; x++) {
      let r = 0;
      let g = 0;
      let b = 0;
      let n = 0;
      let d = 0;
      for (let j = y * factor; j < Math.min(height, (y + 1) * factor); j++)
        for (let i = x * factor; i < Math.min(width, (x + 1) * factor); i++) {
          const at = j * width + i;
          r += rgb[at * 3];
          g += rgb[at * 3 + 1];
          b += rgb[at * 3 + 2];
          d += depth[at] > 0 ? 1 / depth[at] : 0;
          n++;
        }
      const at = y * w + x;
      out.rgb[at * 3] = r / n;
      out.rgb[at * 3 + 1] = g / n;
      out.rgb[at * 3 + 2] = b / n;
      out.depth[at] = d / n;
    }
  return out;
}

/** Signed blur radius in pixels; negative before the plane in focus. */
const blurOf = (inverseDepth, focusM, farRadius) =>
  farRadius * Math.max(-3, Math.min(1, 1 - focusM * inverseDepth));

/**
 * Blurs a picture by its distance from the plane in focus, in place.
 * @param {{ rgb: Float32Array, depth: Float32Array }} picture
 * @param {number} width @param {number} height @param {LensSettings} lens
 */
export function applyDepthOfField(picture, width, height, { focusM, blurShare = 0 }) {
  const farRadius = (blurShare * Math.max(width, height)) / 2;
  if (farRadius < 0.6) return;
  const factor = Math.max(1, Math.min(4, Math.round(farRadius / 7)));
  const small = reduce({ ...picture, width, height }, factor);
  const radii = new Float32Array(small.depth.length);
  for (let i = 0; i < radii.length; i++) radii[i] = blurOf(small.depth[i], focusM, farRadius / factor);
  const reach = spreadForeground(radii, small.width, small.height);
  const blurred = gather(small, radii, reach);
  const { rgb, depth } = picture;
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) {
      const at = y * width + x;
      const own = blurOf(depth[at] > 0 ? 1 / depth[at] : 0, focusM, farRadius);
      const sx = Math.min(small.width - 1.001, Math.max(0, (x + 0.5) / factor - 0.5));
      const sy = Math.min(small.height - 1.001, Math.max(0, (y + 0.5) / factor - 0.5));
      const ix = sx | 0;
      const iy = sy | 0;
      const near = reach[iy * small.width + ix] * factor;
      const amount = Math.max(Math.abs(own), near);
      const t = Math.min(1, Math.max(0, (amount - 0.6) / (0.8 * factor + 0.8)));
      if (t === 0) continue;
      const fx = sx - ix;
      const fy = sy - iy;
      const p = (iy * small.width + ix) * 3;
      const q = p + small.width * 3;
      for (let c = 0; c < 3; c++) {
        const soft =
          (blurred[p + c] * (1 - fx) + blurred[p + 3 + c] * fx) * (1 - fy) +
          (blurred[q + c] * (1 - fx) + blurred[q + 3 + c] * fx) * fy;
        rgb[at * 3 + c] += (soft - rgb[at * 3 + c]) * t;
      }
    }
}

/** How far blur of nearer things reaches over each pixel. */
function spreadForeground(radii, width, height) {
  const cell = 8;
  const columns = Math.ceil(width / cell);
  const rows = Math.ceil(height / cell);
  const cells = new Float32Array(columns * rows);
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) {
      const r = -radii[y * width + x];
      const at = Math.floor(y / cell) * columns + Math.floor(x / cell);
      if (r > cells[at]) cells[at] = r;
    }
  const out = new Float32Array(radii.length);
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) {
      let most = 0;
      const cx = Math.floor(x / cell);
      const cy = Math.floor(y / cell);
      for (let j = Math.max(0, cy - 3); j <= Math.min(rows - 1, cy + 3); j++)
        for (let i = Math.max(0, cx - 3); i <= Math.min(columns - 1, cx + 3); i++) {
          const r = cells[j * columns + i];
          if (r <= most) continue;
          const gapX = Math.max(0, Math.abs(x - (i + 0.5) * cell) - cell / 2);
          const gapY = Math.max(0, Math.abs(y - (j + 0.5) * cell) - cell / 2);
          if (gapX * gapX + gapY * gapY < r * r) most = r;
        }
      out[y * width + x] = most;
    }
  return out;
}

const tapCount = 56;
const spiral = Array.from({ length: tapCount }, (_, i) => {
  const r = Math.sqrt((i + 0.5) / tapCount);
  return [r * Math.cos(i * 2.399963), r * Math.sin(i * 2.399963), r];
}).flat();

function gather({ rgb, depth, width, height }, radii, reach) {
  const out = new Float32Array(rgb.length);
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) {
      const at = y * width + x;
      const own = Math.abs(radii[at]);
      const radius = Math.max(own, reach[at]);
      let total = 1 / (1 + own * own);
      let r = rgb[at * 3] * total;
      let g = rgb[at * 3 + 1] * total;
      let b = rgb[at * 3 + 2] * total;
      if (radius > 0.4)
        for (let i = 0; i < tapCount; i++) {
          const tx = Math.round(x + spiral[i * 3] * radius);
          const ty = Math.round(y + spiral[i * 3 + 1] * radius);
          if (tx < 0 || ty < 0 || tx >= width || ty >= height) continue;
          const tap = ty * width + tx;
          let theirs = Math.abs(radii[tap]);
          // what lies behind cannot spread over what stands before it
          if (depth[tap] < depth[at] && theirs > own) theirs = own;
          const away = spiral[i * 3 + 2] * radius;
          const cover = theirs - away + 0.5;
          if (cover <= 0) continue;
          const weight = (cover > 1 ? 1 : cover) / (theirs * theirs + 1);
          total += weight;
          r += rgb[tap * 3] * weight;
          g += rgb[tap * 3 + 1] * weight;
          b += rgb[tap * 3 + 2] * weight;
        }
      out[at * 3] = r / total;
      out[at * 3 + 1] = g / total;
      out[at * 3 + 2] = b / total;
    }
  return out;
}

/** Spreads a little of the light widely and darkens the corners, in place. */
export function applyFlareAndFalloff(rgb, width, height, { flare = 0.05, falloff = 0.3 }) {
  const factor = Math.max(2, Math.round(Math.max(width, height) / 260));
  const small = reduce({ rgb, depth: new Float32Array(width * height), width, height }, factor);
  let veil = small.rgb;
  for (let pass = 0; pass < 3; pass++) veil = boxBlur(veil, small.width, small.height, 7);
  const half = Math.hypot(width, height) / 2;
  for (let y = 0; y < height; y++) {
    const sy = Math.min(small.height - 1.001, Math.max(0, (y + 0.5) / factor - 0.5));
    const iy = sy | 0;
    const fy = sy - iy;
    for (let x = 0; x < width; x++) {
      const sx = Math.min(small.width - 1.001, Math.max(0, (x + 0.5) / factor - 0.5));
      const ix = sx | 0;
      const fx = sx - ix;
      const away = ((x - width / 2) ** 2 + (y - height / 2) ** 2) / (half * half);
      const dim = 1 - falloff * away * (0.6 + 0.4 * away);
      const p = (iy * small.width + ix) * 3;
      const q = p + small.width * 3;
      const at = (y * width + x) * 3;
      for (let c = 0; c < 3; c++) {
        const soft =
          (veil[p + c] * (1 - fx) + veil[p + 3 + c] * fx) * (1 - fy) +
          (veil[q + c] * (1 - fx) + veil[q + 3 + c] * fx) * fy;
        rgb[at + c] = (rgb[at + c] * (1 - flare) + soft * flare) * dim;
      }
    }
  }
}

function boxBlur(rgb, width, height, radius) {
  const pass = (source, count, length, step, stride) => {
    const out = new Float32Array(source.length);
    for (let line = 0; line < count; line++)
      for (let c = 0; c < 3; c++) {
        const base = line * stride * 3 + c;
        for (let i = 0; i < length; i++) {
          let sum = 0;
          for (let k = -radius; k <= radius; k++)
            sum += source[base + Math.min(length - 1, Math.max(0, i + k)) * step * 3];
          out[base + i * step * 3] = sum / (2 * radius + 1);
        }
      }
    return out;
  };
  return pass(pass(rgb, height, width, 1, width), width, height, width, 1);
}
