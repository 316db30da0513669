import type { Parameters } from '../../core/parameters/table.ts';
import type { LookName } from '../../core/presets/lookName.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import {
  type FrameMatch,
  type MatchParts,
  noMatch,
  parametersWithMatch,
} from '../../core/series/frameMatch.ts';
import type { Engine, EnginePhoto } from '../engine/engineApi.ts';
import { assertFormatHolds } from '../files/outputFormat.ts';
import { SpilledPixels } from '../files/spilledPixels.ts';
import { writePicture } from '../files/writePicture.ts';
import { type DeliveredPainting, deliverPainting } from '../painting/deliverPainting.ts';
import { describePainting } from '../painting/describePainting.ts';
import { holdPhoto, letGo } from '../painting/holdPhoto.ts';
import { printOrderOf } from '../painting/printOrder.ts';
import { readForPrint } from '../painting/readForPrint.ts';
import type { FrameMatching } from './frameMatching.ts';
import { holdMatched, type LeadMeasures, measureLead, reviewLevel } from './matchPhoto.ts';

/** What one frame is painted by. */
export interface FrameOrder {
  photoPath: string;
  /** Where the painting is written, whatever its name will be. */
  part: string;
  parameters: Parameters;
  look: LookName;
  output: OutputSettings;
  match: { lead: LeadMeasures; amount01: number; parts: MatchParts } | null;
}

export interface PaintedFrame extends DeliveredPainting {
  match: FrameMatch;
  /** Before and after matching; null where the frame was not matched. */
  figures: { before: FrameFigures; after: FrameFigures } | null;
}

interface BegunFrame {
  enginePhoto: EnginePhoto;
  matching: FrameMatching | null;
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
  { photoPath, part, parameters, look, output, match: asked }: FrameOrder,
  { signal, onProgress }: FrameOptions = {},
): Promise<PaintedFrame> {
  const { printLongEdgeMm, format, depth, quality, layers, metadata } = output;
  const print = printOrderOf(output);
  const photo = await readForPrint(photoPath, { printLongEdgeMm, print }, { signal });
  const { pixels } = photo;
  const isTooLarge = pixels instanceof SpilledPixels;
  const remarks = asked && isTooLarge ? ['Too large to be matched: painted as it is.'] : [];
  let begun: BegunFrame;
  try {
    // The painting will be as transparent as the photo: better said now than when it is painted.
    if (format === 'jpeg') await assertFormatHolds(part, photo, signal, 'jpeg');
    begun =
      asked && !isTooLarge
        ? await holdMatched(engine, { ...photo, pixels }, parameters, { ...asked, printLongEdgeMm, signal })
        : { enginePhoto: await holdPhoto(engine, photo, { signal }), matching: null };
  } catch (failure) {
    letGo(photo);
    throw failure;
  }
  const { enginePhoto, matching } = begun;
  try {
    const isLayered = layers !== 'none';
    // Layers are made band by band: how to paint has to be known before.
    if (matching && isLayered) await reviewLevel(engine, enginePhoto, matching, { printLongEdgeMm, signal });
    const known = matching?.parameters ?? parameters;
    const { pixels: _, ...file } = photo;
    const order = {
      parameters: matching && isLayered ? parametersWithMatch(parameters, matching.result().match) : known,
      out: part,
      format,
      depth,
      quality,
      metadata,
      ...describePainting(look),
      printLongEdgeMm,
      print: { ...print, writesSize: true },
      layers: isLayered ? layers : undefined,
    };
    const delivered = await deliverPainting(engine, { enginePhoto, file }, order, {
      signal,
      onProgress,
      writePicture,
      review: matching && !isLayered ? matching : undefined,
      // The picture comes first, its strata after it.
      place: async (out, write) => {
        const at = out === part ? part : `${part}.strata`;
        await write(at);
        return at;
      },
    });
    const matched = matching?.result();
    const figures = matched ? { before: matched.before, after: matched.after } : null;
    return {
      ...delivered,
      match: matched?.match ?? noMatch,
      figures,
      remarks: [...remarks, ...delivered.remarks],
    };
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
  const photo = await readForPrint(photoPath, { printLongEdgeMm, print: printOrderOf(output) }, { signal });
  const { pixels } = photo;
  if (pixels instanceof SpilledPixels) {
    letGo(photo);
    return null;
  }
  const decoded = { ...photo, pixels };
  const held = await engine.open(decoded, { signal });
  try {
    return await measureLead(engine, decoded, held, parameters, { printLongEdgeMm, signal });
  } finally {
    held.close();
  }
}
