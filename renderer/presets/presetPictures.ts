import { host, isUnwanted } from '../host/host.ts';
import { sessionStore } from '../state/photoStore.ts';
import { createStore } from '../state/store.ts';

/** Small pictures of the photo at hand, one for each preset, by the preset's name. */
export const presetPictureStore = createStore<ReadonlyMap<string, ImageData>>(new Map());

const longEdgePx = 220;
let work: AbortController | null = null;
let paintedFor = '';

/** Paints them one after another while the easel rests; a picture already painted stays. */
export function paintPresetPictures(photoId: string, printLongEdgeMm: number | undefined): void {
  const key = `${photoId}|${printLongEdgeMm}`;
  if (key === paintedFor && work) return;
  if (key !== paintedFor) {
    work?.abort();
    work = null;
    if (!paintedFor.startsWith(`${photoId}|`)) presetPictureStore.set(new Map());
    paintedFor = key;
  }
  const abort = new AbortController();
  work = abort;
  void paintInTurn(photoId, printLongEdgeMm, abort.signal);
}

async function paintInTurn(photoId: string, printLongEdgeMm: number | undefined, signal: AbortSignal) {
  for (const preset of sessionStore.get()?.presets ?? []) {
    if (signal.aborted) return;
    try {
      const { header, planes } = await host.callForFrame(
        'paintSmallPicture',
        { photoId, parameters: preset.parameters, longEdgePx, printLongEdgeMm },
        { signal },
      );
      if (signal.aborted) return;
      const pixels = new Uint8ClampedArray(planes.rgba as Uint8Array);
      const picture = new ImageData(pixels, header.widthPx, header.heightPx);
      presetPictureStore.update((pictures) => new Map(pictures).set(preset.name, picture));
    } catch (error) {
      // A preset without its picture can still be chosen; the next pause tries again.
      if (!isUnwanted(error)) work = null;
      return;
    }
  }
}

export function forgetPresetPictures(): void {
  work?.abort();
  work = null;
  paintedFor = '';
  presetPictureStore.set(new Map());
}
