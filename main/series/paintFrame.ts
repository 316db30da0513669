import type { Parameters } from '../../core/parameters/table.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import {
  type FrameMatch,
  type MatchParts,
  noMatch,
  parametersWithMatch,
} from '../../core/series/frameMatch.ts';
import type { Engine } from '../engine/engineApi.ts';
import { assertFormatHolds } from '../files/outputFormat.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import { writePicture } from '../files/writePicture.ts';
import { type DeliveredPainting, deliverPainting } from '../painting/deliverPainting.ts';
import { holdPhoto, letGo, readAnyPhoto } from '../painting/holdPhoto.ts';
import { prepareForPrint } from '../painting/prepareForPrint.ts';
import { printOrderOf } from '../painting/printOrder.ts';
import { type LeadMeasures, matchPhoto, measureLead } from './matchPhoto.ts';

/** What one frame is painted by. */
export interface FrameOrder {
  photoPath: string;
  /** Where the painting is written, whatever its name will be. */
  part: string;
  parameters: Parameters;
  output: OutputSettings;
  match: { lead: LeadMeasures; amount01: number; parts: MatchParts } | null;
}

export interface PaintedFrame extends DeliveredPainting {
  match: FrameMatch;
  /** Before and after matching; null where the frame was not matched. */
  figures: { before: FrameFigures; after: FrameFigures } | null;
}

export interface FrameOptions {
  signal?: AbortSignal;
  onProgress?: (fraction01: number) => void;
}

/**
 * Reads, matches, paints and writes one frame.
 * @throws FileError naming the photo or the part
 */
export async function paintFrame(
  engine: Engine,
  { photoPath, part, parameters, output, match: asked }: FrameOrder,
  { signal, onProgress }: FrameOptions = {},
): Promise<PaintedFrame> {
  const { printLongEdgeMm, format, depth, quality, layers, metadata } = output;
  const print = printOrderOf(output);
  const photo = await readForPrint(photoPath, output, signal);
  const { pixels } = photo;
  let matched: Awaited<ReturnType<typeof matchPhoto>> | null = null;
  const remarks: string[] = [];
  try {
    // The painting will be as transparent as the photo: better said now than when it is painted.
    if (format === 'jpeg') await assertFormatHolds(part, photo, signal, 'jpeg');
    if (asked && pixels instanceof SpilledPixels) remarks.push('Too large to be matched: painted as it is.');
    else if (asked) {
      const { lead, amount01, parts } = asked;
      const options = { amount01, parts, printLongEdgeMm, signal };
      matched = await matchPhoto(engine, { ...photo, pixels } as never, lead, parameters, options);
    }
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
  const match = matched?.match ?? noMatch;
  const enginePhoto = await holdPhoto(engine, photo, { signal, toneMap: match.toneMap });
  try {
    const { pixels: _, ...file } = photo;
    const order = {
      parameters: parametersWithMatch(parameters, match),
      out: part,
      format,
      depth,
      quality,
      metadata,
      printLongEdgeMm,
      print: { ...print, writesSize: true },
      layers: layers === 'none' ? undefined : layers,
    };
    const delivered = await deliverPainting(engine, { enginePhoto, file }, order, {
      signal,
      onProgress,
      writePicture,
      // The picture comes first, its strata after it.
      place: async (out, write) => {
        const at = out === part ? part : `${part}.strata`;
        await write(at);
        return at;
      },
    });
    const figures = matched && { before: matched.before, after: matched.after };
    return { ...delivered, match, figures, remarks: [...remarks, ...delivered.remarks] };
  } finally {
    enginePhoto.close();
  }
}

/** Measures the photo that the others are matched to. */
export async function measureLeadPhoto(
  engine: Engine,
  photoPath: string,
  parameters: Parameters,
  output: OutputSettings,
  signal?: AbortSignal,
): Promise<LeadMeasures | null> {
  const { printLongEdgeMm } = output;
  const photo = await readForPrint(photoPath, output, signal);
  const { pixels } = photo;
  if (pixels instanceof SpilledPixels) {
    letGo(photo);
    return null;
  }
  const decoded = { ...photo, pixels };
  const held = await engine.open(decoded, { signal });
  try {
    return await measureLead(engine, decoded, held.noiseFloor, parameters, { printLongEdgeMm, signal });
  } finally {
    held.close();
  }
}

/** Reads a photo and brings it to the print's own pixels where that is asked for. */
async function readForPrint(photoPath: string, output: OutputSettings, signal?: AbortSignal) {
  const photo = await readAnyPhoto(photoPath, { signal });
  try {
    const { printLongEdgeMm } = output;
    return await prepareForPrint(photo, { printLongEdgeMm, ...printOrderOf(output) }, signal);
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
}
