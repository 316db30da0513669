// Renders plates on a thread of its own, one after another as they are asked for.

import { parentPort } from 'node:worker_threads';
import { frames } from './frames.mjs';
import { encodePlate } from './plateFile.mjs';
import { renderFrame } from './renderFrame.mjs';

parentPort.on('message', async ({ number, scale }) => {
  try {
    const frame = frames[number - 1];
    const picture = renderFrame(frame, scale);
    const bytes = await encodePlate(picture, frame);
    parentPort.postMessage({ number, bytes, widthPx: picture.widthPx, heightPx: picture.heightPx });
  } catch (error) {
    parentPort.postMessage({ number, fault: error.stack ?? String(error) });
  }
});
