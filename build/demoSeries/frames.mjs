// The plates of the series: where each was taken from, in what light, with which camera.

import * as scenes from './frameScenes.mjs';

/**
 * @typedef {object} Frame
 * @property {string} name file name without its ending
 * @property {number} widthPx upright @property {number} heightPx upright
 * @property {number} orientation the tag of CIPA DC-008 that the file carries
 * @property {{ eye: number[], target: number[], fovDeg: number, rollDeg?: number }} view
 * @property {string} light @property {(view: { eye: number[], pixelAngle: number }) => object} scene
 * @property {import('./lens.mjs').LensSettings} lens @property {import('./sensor.mjs').SensorSettings} sensor
 * @property {string} caption
 */

/** @type {Frame[]} */
export const frames = [
  {
    name: 'plate-1-landing',
    caption: 'The landing at low water',
    widthPx: 4000,
    heightPx: 3000,
    orientation: 1,
    view: { eye: [-4.6, 2.75, -10.4], target: [3.2, 1.15, 9], fovDeg: 62, rollDeg: 0.4 },
    light: 'fair',
    scene: scenes.landingScene,
    lens: { focusM: 16, blurShare: 0.0004, flare: 0.03, falloff: 0.34 },
    sensor: { exposure: 0.9, balance: [1.02, 1, 0.97], shotNoise: 0.0004, readNoise: 0.002, contrast: 0.6, seed: 11 },
  },
  {
    name: 'plate-2-ferry',
    caption: 'The ferry Low Water',
    widthPx: 3600,
    heightPx: 2400,
    orientation: 3,
    view: { eye: [-2.3, 1.75, -3.2], target: [-0.2, 1.2, 7], fovDeg: 58, rollDeg: -0.5 },
    light: 'afternoon',
    scene: scenes.broadsideScene,
    lens: { focusM: 9.4, blurShare: 0.003, flare: 0.03, falloff: 0.3 },
    sensor: { exposure: 0.8, balance: [1.06, 1, 0.9], shotNoise: 0.0009, readNoise: 0.003, contrast: 0.55, seed: 12 },
  },
  {
    name: 'plate-3-odalys-brook',
    caption: 'Odalys Brook, keeper of the ferry',
    widthPx: 2400,
    heightPx: 3000,
    orientation: 6,
    view: { eye: [0.05, 2.24, 0.62], target: [0.01, 2.14, 2], fovDeg: 25, rollDeg: 0.6 },
    light: 'portrait',
    scene: scenes.portraitScene,
    lens: { focusM: 1.31, blurShare: 0.03, flare: 0.04, falloff: 0.25 },
    sensor: { exposure: 0.88, balance: [1, 1, 1], shotNoise: 0.0006, readNoise: 0.002, contrast: 0.5, seed: 13 },
  },
  {
    name: 'plate-4-hands',
    caption: 'Her hands on the mooring rope',
    widthPx: 3000,
    heightPx: 2000,
    orientation: 1,
    view: { eye: [-0.2, 1.93, 3.8], target: [-0.13, 1.36, 3.13], fovDeg: 40 },
    light: 'fair',
    scene: scenes.handsScene,
    lens: { focusM: 0.84, blurShare: 0.016, flare: 0.03, falloff: 0.3 },
    sensor: { exposure: 0.75, balance: [1.03, 1, 0.94], shotNoise: 0.0016, readNoise: 0.004, contrast: 0.5, seed: 14 },
  },
  {
    name: 'plate-5-heron',
    caption: 'The heron',
    widthPx: 2560,
    heightPx: 3200,
    orientation: 1,
    view: { eye: [-0.1, 0.95, -0.6], target: [0.12, 0.57, 3.4], fovDeg: 28 },
    light: 'afternoon',
    scene: scenes.heronScene,
    lens: { focusM: 3.98, blurShare: 0.016, flare: 0.03, falloff: 0.3 },
    sensor: { exposure: 0.72, balance: [0.98, 1, 1.04], shotNoise: 0.0008, readNoise: 0.003, contrast: 0.5, seed: 15 },
  },
  {
    name: 'plate-6-mist',
    caption: 'First crossing, in mist',
    widthPx: 3000,
    heightPx: 2000,
    orientation: 1,
    view: { eye: [0.6, 1.9, -5.2], target: [1.3, 1.3, 14], fovDeg: 56 },
    light: 'mist',
    scene: scenes.mistScene,
    lens: { focusM: 14, blurShare: 0.0006, flare: 0.07, falloff: 0.25 },
    sensor: { exposure: 0.74, balance: [0.96, 1, 1.08], shotNoise: 0.0014, readNoise: 0.004, contrast: 0.35, seed: 16 },
  },
  {
    name: 'plate-7-dusk',
    caption: 'The last crossing',
    widthPx: 3200,
    heightPx: 2133,
    orientation: 1,
    view: { eye: [-0.8, 2, -7.6], target: [2.1, 1.75, 10], fovDeg: 58, rollDeg: 0.8 },
    light: 'dusk',
    scene: scenes.duskScene,
    lens: { focusM: 17, blurShare: 0.0006, flare: 0.09, falloff: 0.4 },
    sensor: { exposure: 1.05, balance: [1.04, 1, 0.96], shotNoise: 0.0045, readNoise: 0.009, contrast: 0.5, seed: 17 },
  },
  {
    name: 'plate-8-far-bank',
    caption: 'The village from the water',
    widthPx: 3600,
    heightPx: 2400,
    orientation: 1,
    view: { eye: [-9, 2.6, 22], target: [-6, 5.6, 104], fovDeg: 40, rollDeg: -0.3 },
    light: 'afternoon',
    scene: scenes.villageScene,
    lens: { focusM: 80, flare: 0.04, falloff: 0.28 },
    sensor: { exposure: 1.0, balance: [1.08, 1, 0.86], shotNoise: 0.0006, readNoise: 0.002, contrast: 0.45, seed: 18 },
  },
  {
    name: 'plate-9-rain',
    caption: 'Under the awning, in rain',
    widthPx: 2048,
    heightPx: 1536,
    orientation: 1,
    view: { eye: [2.9, 1.85, -3.4], target: [0.6, 1.4, 4.4], fovDeg: 60, rollDeg: 1 },
    light: 'rain',
    scene: scenes.rainScene,
    lens: { focusM: 7.5, blurShare: 0.002, flare: 0.05, falloff: 0.32 },
    sensor: { exposure: 1.0, balance: [0.93, 1, 1.12], shotNoise: 0.003, readNoise: 0.007, contrast: 0.4, seed: 19 },
  },
];
