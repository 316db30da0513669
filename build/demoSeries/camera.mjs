// Where the photographer stands and what the lens takes in.

/** @typedef {import('./mesh.mjs').Triple} Triple */
/**
 * @typedef {object} Camera
 * @property {Triple} eye @property {Triple} right @property {Triple} up @property {Triple} forward
 * @property {number} focalPx @property {number} widthPx @property {number} heightPx
 */

const cross = (a, b) => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
export const unit = (a) => {
  const length = Math.hypot(a[0], a[1], a[2]);
  return /** @type {Triple} */ ([a[0] / length, a[1] / length, a[2] / length]);
};

/**
 * @param {{ eye: Triple, target: Triple, fovDeg: number, rollDeg?: number }} view fovDeg spans the long edge
 * @param {number} widthPx @param {number} heightPx
 * @returns {Camera}
 */
export function makeCamera({ eye, target, fovDeg, rollDeg = 0 }, widthPx, heightPx) {
  const forward = unit([target[0] - eye[0], target[1] - eye[1], target[2] - eye[2]]);
  const level = unit(cross([0, 1, 0], forward));
  const upright = cross(forward, level);
  const [c, s] = [Math.cos((rollDeg * Math.PI) / 180), Math.sin((rollDeg * Math.PI) / 180)];
  const right = [0, 1, 2].map((i) => level[i] * c + upright[i] * s);
  const up = [0, 1, 2].map((i) => upright[i] * c - level[i] * s);
  const focalPx = Math.max(widthPx, heightPx) / 2 / Math.tan((fovDeg * Math.PI) / 360);
  return /** @type {Camera} */ ({ eye, right, up, forward, focalPx, widthPx, heightPx });
}

/** The camera as still water shows it: everything on its other side of the level y = 0. @returns {Camera} */
export function mirroredCamera(camera) {
  const flip = ([x, y, z]) => /** @type {Triple} */ ([x, -y, z]);
  return {
    ...camera,
    eye: flip(camera.eye),
    right: flip(camera.right),
    up: flip(camera.up),
    forward: flip(camera.forward),
  };
}

/** The same view with another pixel grid. @returns {Camera} */
export function resizedCamera(camera, factor) {
  return {
    ...camera,
    focalPx: camera.focalPx * factor,
    widthPx: Math.max(1, Math.round(camera.widthPx * factor)),
    heightPx: Math.max(1, Math.round(camera.heightPx * factor)),
  };
}
