import { basename, dirname, extname, join } from 'node:path';
import { defaultPrintLongEdgeMm } from '../../core/parameters/lengths.ts';
import { parseParameters } from '../../core/parameters/parse.ts';
import { currentHistory, currentState } from '../../core/recipes/recipeHistory.ts';
import type { Engine } from '../engine/engineApi.ts';
import { assertWritable, refuseOverwritingOriginal } from '../files/outputPath.ts';
import { deliverPainting } from '../painting/deliverPainting.ts';
import { describePainting } from '../painting/describePainting.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { CheckedInput } from './api/commandSchemas.ts';
import type { OutputFormatName, SavedPainting } from './api/hostCommands.ts';
import type { EventHub } from './eventHub.ts';
import type { HostFiles } from './hostParts.ts';
import type { OpenPhoto } from './openPhoto.ts';
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
 * Paints a photo at full resolution and writes it; a file of that name that is there already stays.
 * @throws Refusal where the folder was not chosen or the name cannot be used
 * @throws FileError where the file cannot be written
 */
export async function savePainting(
  photo: OpenPhoto,
  input: CheckedInput<'savePainting'>,
  call: RunningCall,
  parts: SaveParts,
): Promise<SavedPainting> {
  const started = performance.now();
  const parameters = parseParameters(input.parameters);
  const target = join(parts.grants.checkWriting(input.folder), checkName(input.name, input.format));
  const replace = input.whenTaken === 'replace';
  if (replace) await checkReplacing(target, parts);
  const report = progressReporter(call.id, parts.events);
  // Found out before the painting, not after it.
  await assertWritable(replace ? target : await firstFree(target));
  report(0, 'opening');
  const [engine, files] = await Promise.all([parts.loadEngine(), parts.loadFiles()]);
  const { file } = await photo.whole(call.signal);
  const { recipe } = await parts.memories.view(photo.photoId);
  const order = {
    parameters,
    out: target,
    format: input.format,
    depth: input.depth,
    quality: input.quality,
    printLongEdgeMm: input.printLongEdgeMm ?? defaultPrintLongEdgeMm,
    metadata: recipe.work.output.metadata,
    ...describePainting(currentHistory(recipe).title, currentState(recipe).number),
  };
  const delivered = await photo.paint(0, call.signal, ({ enginePhoto }, signal) =>
    deliverPainting(engine, { enginePhoto, file }, order, {
      signal,
      onProgress: report,
      writePicture: files.writePicture,
      place: replace ? placeOver : placeNew,
    }),
  );
  report(1, 'writing');
  const { path, widthPx, heightPx } = delivered;
  const { sizeBytes, sha256 } = await fingerprintPhoto(path);
  const memory = await parts.memories.noteDelivered(photo, {
    path,
    sha256,
    pixelsSha256: delivered.pixelsSha256,
    parameters,
    output: {
      format: input.format,
      depth: delivered.depth,
      printLongEdgeMm: order.printLongEdgeMm,
      ...(input.quality !== undefined && { quality: input.quality }),
    },
  });
  return {
    path,
    name: basename(path),
    folder: dirname(path),
    widthPx,
    heightPx,
    sizeBytes,
    tookMs: Math.round(performance.now() - started),
    memory,
  };
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
