// One plate, from scene to developed pixels.

import { makeCamera } from './camera.mjs';
import { exposePicture } from './exposePicture.mjs';
import { applyDepthOfField, applyFlareAndFalloff } from './lens.mjs';
import { lights } from './lights.mjs';
import { addRainStreaks } from './rain.mjs';
import { develop } from './sensor.mjs';
import { Sky } from './sky.mjs';

/** Whether something standing at (x, z) can be in the picture, with twenty metres to spare. */
function viewTest({ eye, forward, right, focalPx, widthPx }) {
  const slope = widthPx / 2 / focalPx;
  return (x, z) => {
    const ahead = (x - eye[0]) * forward[0] + (z - eye[2]) * forward[2];
    const aside = Math.abs((x - eye[0]) * right[0] + (z - eye[2]) * right[2]);
    return ahead > 0 && aside < ahead * slope + 20;
  };
}

/**
 * @param {import('./frames.mjs').frames[number]} frame @param {number} scale of the full size, 0…1
 * @returns {{ pixels: Uint8Array, widthPx: number, heightPx: number }} upright, encoded sRGB
 */
export function renderFrame(frame, scale) {
  const widthPx = Math.max(16, Math.round(frame.widthPx * scale));
  const heightPx = Math.max(16, Math.round(frame.heightPx * scale));
  const camera = makeCamera(frame.view, widthPx, heightPx);
  const light = lights[frame.light];
  const setting = frame.scene({ eye: camera.eye, pixelAngle: 1 / camera.focalPx, sees: viewTest(camera) });
  const scene = { ...setting, sky: new Sky(light.sky), air: setting.air ?? light.air };
  const picture = exposePicture(scene, camera);
  applyDepthOfField(picture, widthPx, heightPx, frame.lens);
  if (frame.rain) addRainStreaks(picture.rgb, widthPx, heightPx, { ...frame.rain, light: light.sky.horizon });
  applyFlareAndFalloff(picture.rgb, widthPx, heightPx, frame.lens);
  return { pixels: develop(picture.rgb, widthPx * heightPx, frame.sensor), widthPx, heightPx };
}
