// OpenCV (@techstark/opencv-js, Apache 2.0) as an outside reference for the kernels.
import { createRequire } from 'node:module';
import type * as OpenCv from '@techstark/opencv-js';
import type { ReferenceImage } from '../../core/kernels/reference/referenceImage.ts';

export type Cv = typeof OpenCv;

/**
 * Loads the library. Its module has a `then` of its own, so that awaiting or returning it never ends: it is
 * handed over inside an object.
 */
export async function loadOpenCv(): Promise<{ cv: Cv }> {
  const cv = createRequire(import.meta.url)('@techstark/opencv-js') as Cv & {
    onRuntimeInitialized?: () => void;
  };
  if (!cv.Mat) await new Promise<void>((resolve) => (cv.onRuntimeInitialized = resolve));
  return { cv };
}

/** One channel of a picture as a float32 matrix. The caller deletes it. */
export function matOf(cv: Cv, image: ReferenceImage, channel = 0): OpenCv.Mat {
  const { widthPx, heightPx, channels } = image;
  const mat = new cv.Mat(heightPx, widthPx, cv.CV_32FC1);
  for (let i = 0; i < widthPx * heightPx; i++) mat.data32F[i] = image.values[i * channels + channel];
  return mat;
}

/** The samples of a one-channel float32 or float64 matrix; deletes the matrix. */
export function takeValues(mat: OpenCv.Mat): Float64Array {
  const values = Float64Array.from(mat.depth() === 6 ? mat.data64F : mat.data32F);
  mat.delete();
  return values;
}
