import { useEffect, useState } from 'react';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import type { State } from '../../core/presets/state.ts';
import { host } from '../host/host.ts';

const longEdgePx = 260;
/** A picture takes about a quarter of a megabyte. */
const mostKept = 120;
/** Somebody who only passes over a state wants no picture of it. */
const pauseMs = 120;

const kept = new Map<string, ImageData>();

/** The small picture of a state of this photo, painted when first asked for; undefined until it is there. */
export function useStatePicture(
  photoId: string,
  state: State,
  printLongEdgeMm: number,
): ImageData | undefined {
  const key = `${photoId}|${state.id}|${printLongEdgeMm}`;
  const [painted, setPainted] = useState<string | null>(null);
  useEffect(() => {
    if (kept.has(key)) return;
    const abort = new AbortController();
    const timer = setTimeout(() => {
      void paint(photoId, state, printLongEdgeMm, abort.signal).then((picture) => {
        if (!picture) return;
        kept.set(key, picture);
        if (kept.size > mostKept) kept.delete(kept.keys().next().value!);
        if (!abort.signal.aborted) setPainted(key);
      });
    }, pauseMs);
    return () => {
      clearTimeout(timer);
      abort.abort();
    };
  }, [key, photoId, state, printLongEdgeMm]);
  return painted === key || kept.has(key) ? kept.get(key) : undefined;
}

async function paint(
  photoId: string,
  state: State,
  printLongEdgeMm: number,
  signal: AbortSignal,
): Promise<ImageData | null> {
  try {
    const parameters = fullParameters(state.parameters);
    const { header, planes } = await host.callForFrame(
      'paintSmallPicture',
      { photoId, parameters, longEdgePx, view: 'state', printLongEdgeMm },
      { signal },
    );
    const pixels = new Uint8ClampedArray(planes.rgba as Uint8Array);
    return new ImageData(pixels, header.widthPx, header.heightPx);
  } catch {
    // A state without its picture still has its words.
    return null;
  }
}
