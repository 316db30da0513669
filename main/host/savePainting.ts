import { basename, dirname, extname, join } from 'node:path';
import { parseParameters } from '../../core/parameters/parse.ts';
import { changedOutput } from '../../core/recipes/outputSettings.ts';
import { lookNameOf } from '../../core/recipes/recipeHistory.ts';
import type { Engine } from '../engine/engineApi.ts';
import { FileError } from '../files/fileError.ts';
import { assertWritable, refuseOverwritingOriginal } from '../files/outputPath.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import type { DeliveredPainting, DeliveryOptions, PaintingOrder } from '../painting/deliverPainting.ts';
import { describePainting } from '../painting/describePainting.ts';
import { fileOrderOf, paintsOwnPixels } from '../painting/printOrder.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { CheckedInput } from './api/commandSchemas.ts';
import type { OutputFormatName, SavedPainting } from './api/hostCommands.ts';
import type { EventHub } from './eventHub.ts';
import type { HostFiles } from './hostParts.ts';
import type { OpenPhoto } from './openPhoto.ts';
import { stampOf } from './openPhotos.ts';
import type { PathGrants } from './pathGrants.ts';
import type { PhotoMemories } from './photoMemories.ts';
import { firstFree, placeNew, placeOver } from './placeFile.ts';
import { Refusal } from './refusal.ts';
import type { RunningCall } from './runningCalls.ts';

const extensions: Record<OutputFormatName, readonly string[]> = {
  jpeg: ['.jpg', '.jpeg'],
  png: ['.png'],
  tiff: ['.tif', '.tiff'],
  webp: ['.webp'],
};

/** Names that Windows keeps for devices: a file of that name could never be opened there. */
const deviceName = /^(con|prn|aux|nul|com\d|lpt\d)(\.|$)/i;
// biome-ignore lint/suspicious/noControlCharactersInRegex: control characters are what is looked for.
const forbiddenInName = /[\\/:*?"<>|\u0000-\u001f]/;

export interface SaveParts {
  loadEngine(): Promise<Engine>;
  loadFiles(): Promise<HostFiles>;
  grants: PathGrants;
  events: EventHub;
  /** Every open photo: none of their files is ever written over. */
  openPaths(): string[];
  memories: PhotoMemories;
}

/**
 * Paints a photo for print as its recipe asks and writes it; a file of that name that is there already stays.
 * @throws Refusal where the folder or the profile was not chosen or the name cannot be used
 * @throws FileError where the file cannot be written, or cannot hold what it is to hold
 */
export async function savePainting(
  photo: OpenPhoto,
  input: CheckedInput<'savePainting'>,
  call: RunningCall,
  parts: SaveParts,
): Promise<SavedPainting> {
  const started = performance.now();
  const parameters = parseParameters(input.parameters);
  const { recipe } = await parts.memories.view(photo.photoId);
  const output = changedOutput(recipe.work.output, input.output ?? {});
  const target = join(parts.grants.checkWriting(input.folder), checkName(input.name, output.format));
  if (typeof output.profile === 'object') parts.grants.checkProfile(output.profile.file);
  const replace = input.whenTaken === 'replace';
  if (replace) await checkReplacing(target, parts);
  const report = progressReporter(call.id, parts.events);
  // Found out before the painting, not after it.
  await assertWritable(replace ? target : await firstFree(target));
  report(0, 'opening');
  const order = {
    ...fileOrderOf(output),
    parameters,
    out: target,
    ...describePainting(lookNameOf(recipe)),
  };
  const delivered = await paint(photo, order, call, parts, {
    onProgress: report,
    // Somebody agreed to replace the picture, and nothing beside it.
    place: (out, write, signal) =>
      replace && out === target ? placeOver(out, write) : placeNew(out, write, signal),
  });
  report(1, 'writing');
  const { path, layersPath, widthPx, heightPx } = delivered;
  const { sizeBytes, sha256 } = await fingerprintPhoto(path);
  const memory = await parts.memories.noteDelivered(photo, {
    path,
    sha256,
    pixelsSha256: delivered.pixelsSha256,
    parameters,
    output: { ...output, depth: delivered.depth },
  });
  return {
    path,
    name: basename(path),
    folder: dirname(path),
    layersName: layersPath && basename(layersPath),
    widthPx,
    heightPx,
    sizeBytes,
    tookMs: Math.round(performance.now() - started),
    memory,
  };
}

/** Paints what the engine holds; where the print has other pixels, the photo is read once more and brought to them. */
async function paint(
  photo: OpenPhoto,
  order: PaintingOrder,
  { signal: asked }: RunningCall,
  parts: SaveParts,
  options: Pick<DeliveryOptions, 'onProgress' | 'place'>,
): Promise<DeliveredPainting> {
  const [engine, files] = await Promise.all([parts.loadEngine(), parts.loadFiles()]);
  const { file } = await photo.whole(asked);
  const { writePicture } = files;
  // Whether a photo with alpha is opaque can be told by its pixels alone, and JPEG wants to know before the painting.
  const mayBeRefused = order.format === 'jpeg' && file.channels === 4;
  if (paintsOwnPixels(file, order) && !mayBeRefused)
    return photo.paint(0, asked, ({ enginePhoto }, signal) =>
      files.deliverPainting(engine, { enginePhoto, file }, order, { ...options, signal, writePicture }),
    );
  return photo.use(async () => {
    const signal = AbortSignal.any([asked, photo.closingSignal]);
    const prepared = await files.readForPrint(photo.path, order, { signal });
    await assertSamePhoto(photo, prepared);
    return files.paintPrepared(engine, prepared, order, { ...options, signal, writePicture });
  });
}

/** What is on the easel was read when it was opened; its file may be another by now. */
async function assertSamePhoto({ path, stamp }: OpenPhoto, { pixels }: { pixels: object }): Promise<void> {
  if ((await stampOf(path).catch(() => '')) === stamp) return;
  if (pixels instanceof SpilledPixels) pixels.discard();
  throw new FileError(
    path,
    'is not the file any more that was opened',
    'Open the photograph again, then save.',
  );
}

const reportEveryMs = 100;

function progressReporter(callId: string, events: EventHub): (fraction01: number, stage: string) => void {
  let lastMs = Number.NEGATIVE_INFINITY;
  let lastStage = '';
  return (fraction01, stage) => {
    const nowMs = performance.now();
    if (stage === lastStage && nowMs - lastMs < reportEveryMs && fraction01 < 1) return;
    lastMs = nowMs;
    lastStage = stage;
    events.send('progress', { callId, fraction01, stage });
  };
}

/** The name with the format's extension. */
export function checkName(name: string, format: OutputFormatName): string {
  const trimmed = checkFileName(name);
  const fits = extensions[format].includes(extname(trimmed).toLowerCase());
  return fits ? trimmed : `${trimmed}${extensions[format][0]}`;
}

/** @throws Refusal where the name is not that of a plain file */
export function checkFileName(name: string): string {
  const trimmed = name.trim();
  const fault = forbiddenInName.exec(trimmed);
  if (fault || trimmed.startsWith('.') || trimmed.endsWith('.') || deviceName.test(trimmed) || !trimmed)
    throw new Refusal(
      'BadRequest',
      `${JSON.stringify(name)} cannot be a file name.`,
      'Use letters, figures, spaces and hyphens; choose the folder separately.',
    );
  return trimmed;
}

async function checkReplacing(target: string, parts: SaveParts): Promise<void> {
  if (!parts.grants.mayReplace(target))
    throw new Refusal(
      'NotAllowed',
      `Nobody agreed to replace ${target}.`,
      'Choose the file in the save dialog, or save under a name of its own.',
    );
  for (const path of parts.openPaths()) await refuseOverwritingOriginal(path, target);
}
