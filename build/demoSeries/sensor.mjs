// The sensor and the camera's own development: white balance, noise, tone, 8 bits.

/**
 * @typedef {object} SensorSettings
 * @property {number} exposure multiplies the light
 * @property {[number, number, number]} balance gains of red, green, blue
 * @property {number} shotNoise variance per unit of light
 * @property {number} readNoise standard deviation in the dark
 * @property {number} [contrast] 0…1 @property {number} [saturation]
 * @property {number} seed
 */

const steps = 8192;
const brightest = 6;

/** Scene light to an encoded value: a soft shoulder, then the sRGB curve (IEC 61966-2-1), then contrast. */
function toneTable(contrast) {
  const table = new Float32Array(steps + 1);
  for (let i = 0; i <= steps; i++) {
    const x = (i / steps) ** 2 * brightest;
    const shoulder = (x * (1 + x / 12)) / (1 + x * 0.72);
    const y = Math.min(1, shoulder);
    const encoded = y <= 0.0031308 ? 12.92 * y : 1.055 * y ** (1 / 2.4) - 0.055;
    const curved = encoded * encoded * (3 - 2 * encoded);
    table[i] = (encoded + (curved - encoded) * contrast) * 255;
  }
  return table;
}

/** Nearly normal noise, variance 1, from one hashed number. */
function gaussian(index, channel, seed) {
  let h = Math.imul(index * 3 + channel, 0x9e3779b1) ^ seed;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  h ^= h >>> 16;
  const k = Math.imul(h ^ 0x5bd1e995, 0x27d4eb2f);
  const sum =
    (h & 255) + ((h >>> 8) & 255) + ((h >>> 16) & 255) + (h >>> 24) + (k >>> 24) + ((k >>> 16) & 255);
  return (sum - 765) / 181;
}

/**
 * @param {Float32Array} rgb radiance, interleaved @param {number} pixels
 * @param {SensorSettings} settings
 * @returns {Uint8Array} encoded sRGB
 */
export function develop(
  rgb,
  pixels,
  { exposure, balance, shotNoise, readNoise, contrast = 0.3, saturation = 1.08, seed },
) {
  const out = new Uint8Array(pixels * 3);
  const table = toneTable(contrast);
  const raw = [0, 0, 0];
  for (let i = 0; i < pixels; i++) {
    // part of each channel's noise is shared: the camera fills colours in from neighbours
    const shared = gaussian(i, 0, seed ^ 0x51ed270b);
    for (let c = 0; c < 3; c++) {
      const light = rgb[i * 3 + c] * exposure;
      const sigma = Math.sqrt(shotNoise * light + readNoise * readNoise);
      raw[c] = (light + sigma * (0.6 * shared + 0.8 * gaussian(i, c, seed))) * balance[c];
    }
    const grey = 0.2627 * raw[0] + 0.678 * raw[1] + 0.0593 * raw[2];
    for (let c = 0; c < 3; c++) {
      const x = grey + (raw[c] - grey) * saturation;
      const place = x <= 0 ? 0 : x >= brightest ? steps : Math.sqrt(x / brightest) * steps;
      const low = place | 0;
      const a = table[low];
      const value = a + (table[low < steps ? low + 1 : steps] - a) * (place - low);
      out[i * 3 + c] = value + 0.5;
    }
  }
  return out;
}
