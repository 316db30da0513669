import type { PresetOffer } from '../../main/host/api/memoryCommands.ts';
import { host } from '../host/host.ts';
import { sessionStore } from '../state/photoStore.ts';
import { createStore } from '../state/store.ts';

/** Small pictures of the photo at hand, one for each preset, by the preset's name. */
export const presetPictureStore = createStore<ReadonlyMap<string, ImageData>>(new Map());

const longEdgePx = 220;
let work: { abort: AbortController; key: string } | null = null;
/** What each picture in the store was painted from. */
let painted = new Map<string, string>();

/** Paints those that are missing, one after another, while the easel rests. */
export function paintPresetPictures(photoId: string, printLongEdgeMm: number | undefined): void {
  const key = `${photoId}|${printLongEdgeMm}`;
  if (work?.key === key) return;
  work?.abort.abort();
  const mine = { abort: new AbortController(), key };
  work = mine;
  void paintInTurn(photoId, printLongEdgeMm, mine.abort.signal).finally(() => {
    if (work === mine) work = null;
  });
}

function sourceOf({ states }: PresetOffer, printLongEdgeMm: number | undefined): string {
  return `${states.at(-1)?.id}|${printLongEdgeMm}`;
}

async function paintInTurn(photoId: string, printLongEdgeMm: number | undefined, signal: AbortSignal) {
  // The shelf may change meanwhile: the next one is looked for each time.
  const nextMissing = () =>
    sessionStore
      .get()
      ?.presets.find((preset) => painted.get(preset.name) !== sourceOf(preset, printLongEdgeMm));
  for (let preset = nextMissing(); preset; preset = nextMissing()) {
    const { name, parameters } = preset;
    try {
      const { header, planes } = await host.callForFrame(
        'paintSmallPicture',
        { photoId, parameters, longEdgePx, printLongEdgeMm },
        { signal },
      );
      if (signal.aborted) return;
      const pixels = new Uint8ClampedArray(planes.rgba as Uint8Array);
      const picture = new ImageData(pixels, header.widthPx, header.heightPx);
      painted.set(name, sourceOf(preset, printLongEdgeMm));
      presetPictureStore.update((pictures) => new Map(pictures).set(name, picture));
    } catch {
      // A preset without its picture can still be chosen; the next pause tries again.
      return;
    }
  }
}

/** Another photo comes to the easel, or none. */
export function forgetPresetPictures(): void {
  work?.abort.abort();
  work = null;
  painted = new Map();
  presetPictureStore.set(new Map());
}
