/** Keeps what the chosen print makes of the photo's colours at hand for the compositor, which marks what is lost. */
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import { compositor } from '../compositing/compositor.ts';
import { host, isUnwanted, troubleOf } from '../host/host.ts';
import { changeGamut } from '../state/gamutStore.ts';
import { outputStore } from '../state/outputStore.ts';
import { photoStore } from '../state/photoStore.ts';

let following = '';
let reading: AbortController | null = null;

/** Begins to follow the photo on the easel and its print's profile; called once. */
export function startGamutWork(): void {
  compositor.onOutside = (share01) => changeGamut({ share01 });
  // A photo and its settings are laid on the easel one after the other: both are there a moment later.
  const follow = () => queueMicrotask(followPrint);
  outputStore.subscribe(follow);
  photoStore.subscribe(follow);
}

/** Reads the profile once more, for it may have come back. */
export function readProfileAgain(): void {
  following = '';
  followPrint();
}

function followPrint(): void {
  const photoId = photoStore.get()?.photoId;
  const profile = outputStore.get()?.profile ?? 'keep';
  const key = photoId && profile !== 'keep' ? JSON.stringify([photoId, profile]) : '';
  if (key === following) return;
  following = key;
  reading?.abort();
  compositor.setGamutTable(null);
  changeGamut({ isKnown: false, share01: null, trouble: null });
  if (photoId && key) void readTable(photoId, profile);
}

async function readTable(photoId: string, profile: OutputSettings['profile']): Promise<void> {
  const abort = new AbortController();
  reading = abort;
  try {
    const { planes } = await host.callForFrame(
      'readGamutTable',
      { photoId, profile: typeof profile === 'object' ? { file: profile.file } : profile },
      { signal: abort.signal },
    );
    const { table } = planes;
    if (abort.signal.aborted || !(table instanceof Uint16Array)) return;
    compositor.setGamutTable(table.slice());
    changeGamut({ isKnown: true });
  } catch (error) {
    if (!abort.signal.aborted && !isUnwanted(error)) changeGamut({ trouble: troubleOf(error) });
  }
}
