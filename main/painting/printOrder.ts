import { readFile } from 'node:fs/promises';
import { p3Profile, srgbProfile } from '../../core/colour/matrixProfile.ts';
import {
  type CropFrame,
  keepsPixels,
  mmPerInch,
  planMargins,
  planPrint,
} from '../../core/print/printPlan.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { Intent } from '../colour/colourEngine.ts';
import type { Conversion } from '../colour/finishPixels.ts';
import type { TrimMarks } from '../colour/trimMarks.ts';
import { FileError } from '../files/fileError.ts';
import { profileSpace } from '../files/inputProfile.ts';
import type { LayersKind } from '../files/layers/writeLayers.ts';
import type { OutputFormat } from '../files/photoFile.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';

/** What a file is made for: its colours and its place on paper. */
export interface PrintOrder {
  /** The photo's own space, sRGB, Display P3, or an ICC file for RGB or CMYK. */
  profile?: 'keep' | 'srgb' | 'p3' | { file: string };
  intent?: Intent;
  blackPointCompensation?: boolean;
  /** Brings the picture to so many pixels per inch of the print before it is painted. */
  ppi?: number;
  crop?: CropFrame;
  /** Mirrored extension on every side, beyond the print's edge. */
  bleedMm?: number;
  trimMarks?: boolean;
  /** Writes the print's own pixels per inch, not those that the photo came with. */
  writesSize?: boolean;
}

/** The file itself, wherever it goes and whatever is painted. */
export interface FileOrder {
  format: OutputFormat;
  /** Bits a sample; the photo's own unless given, and never more than the format holds. */
  depth?: 8 | 16;
  /** 1…100, for JPEG and WebP. */
  quality?: number;
  printLongEdgeMm: number;
  /** How much of the photo's EXIF goes along; `essential` unless given. */
  metadata?: 'all' | 'essential' | 'none';
  /** Colours and place on paper; the photo's own unless given. */
  print?: PrintOrder;
  /** Writes the strata too, beside the picture and under its name, in the photo's own colours. */
  layers?: LayersKind;
}

/** What a recipe's output settings ask for. */
export function printOrderOf(output: OutputSettings): PrintOrder {
  const { profile, intent, blackPointCompensation, bleedMm, cropFrame: crop, trimMarks } = output;
  return {
    profile,
    intent,
    blackPointCompensation,
    bleedMm,
    crop,
    trimMarks,
    ppi: output.isResampled ? output.ppi : undefined,
  };
}

/** What file a recipe's output settings ask for, which tells its own size in any case. */
export function fileOrderOf(output: OutputSettings): FileOrder {
  const { format, depth, quality, printLongEdgeMm, metadata, layers } = output;
  return {
    format,
    depth,
    quality,
    printLongEdgeMm,
    metadata,
    print: { ...printOrderOf(output), writesSize: true },
    layers: layers === 'none' ? undefined : layers,
  };
}

/** The part of an order that decides which pixels are painted. */
export type SizeOrder = Pick<FileOrder, 'printLongEdgeMm' | 'print'>;

/** Whether a print is painted from the photo's pixels as they are. */
export function paintsOwnPixels(
  photo: { widthPx: number; heightPx: number },
  { printLongEdgeMm, print = {} }: SizeOrder,
): boolean {
  const { ppi = null, crop = null } = print;
  return keepsPixels(photo, planPrint(photo, { printLongEdgeMm, ppi, crop }));
}

/** What is left to do to painted pixels before they are encoded. */
export interface FinishPlan {
  /** What to paint at, so that conversion and reduction start from 16 bits where they need to. */
  paintDepth: 8 | 16;
  depth: 8 | 16;
  conversion: Conversion | null;
  space: 'RGB' | 'CMYK';
  bleedPx: number;
  trimMarks: TrimMarks | null;
  iccProfile: Uint8Array;
  densityPpi: number | undefined;
  isNeeded: boolean;
}

/**
 * Plans what happens between painting and encoding.
 * @param photo the picture that is painted
 * @param depth of the file
 * @throws FileError where a profile cannot be used, or the format cannot hold its colours
 */
export async function planFinish(
  out: string,
  order: { printLongEdgeMm: number; format: OutputFormat; print?: PrintOrder },
  photo: { widthPx: number; heightPx: number; depth: 8 | 16; iccProfile?: Uint8Array; densityPpi?: number },
  depth: 8 | 16,
): Promise<FinishPlan> {
  const { print = {} } = order;
  const own = photo.iccProfile ?? srgbProfile();
  const target = await readPrintProfile(print.profile ?? 'keep', own);
  const space = target.space;
  if (space === 'CMYK' && order.format !== 'tiff' && order.format !== 'jpeg')
    throw new FileError(out, 'cannot hold the inks of a CMYK profile', 'Choose TIFF or JPEG.');
  const conversion = sameBytes(own, target.profile)
    ? null
    : {
        from: own,
        to: target.profile,
        intent: print.intent ?? 'relative',
        blackPointCompensation: print.blackPointCompensation ?? true,
      };
  const ownPpi = Math.max(photo.widthPx, photo.heightPx) / (order.printLongEdgeMm / mmPerInch);
  const ppi = print.ppi ?? ownPpi;
  const { bleedPx, marks } = planMargins(ppi, print.bleedMm ?? 0, print.trimMarks ?? false);
  const trimMarks = marks && { ...marks, bleedPx };
  const isReduced = photo.depth === 16 && depth === 8;
  const writesSize = print.writesSize || print.ppi !== undefined || bleedPx > 0 || trimMarks !== null;
  return {
    paintDepth: conversion || isReduced ? 16 : depth,
    depth,
    conversion,
    space,
    bleedPx,
    trimMarks,
    iccProfile: target.profile,
    densityPpi: writesSize ? ppi : photo.densityPpi,
    isNeeded: conversion !== null || isReduced || bleedPx > 0 || trimMarks !== null,
  };
}

/**
 * The profile that a file is made for.
 * @param own what the photo's numbers mean
 * @throws FileError where a file is no profile for RGB or CMYK
 */
export async function readPrintProfile(
  profile: NonNullable<PrintOrder['profile']>,
  own: Uint8Array,
): Promise<{ profile: Uint8Array; space: 'RGB' | 'CMYK' }> {
  if (profile === 'keep') return { profile: own, space: 'RGB' };
  if (profile === 'srgb') return { profile: srgbProfile(), space: 'RGB' };
  if (profile === 'p3') return { profile: p3Profile(), space: 'RGB' };
  const bytes = await readFile(profile.file).catch((failure) => {
    throw fileErrorFrom(profile.file, failure);
  });
  const plain = new Uint8Array(bytes);
  const space = profileSpace(plain)?.trim();
  if (space === 'RGB' || space === 'CMYK') return { profile: plain, space };
  throw new FileError(
    profile.file,
    space ? `is a colour profile for ${space}` : 'is no colour profile',
    'Choose an ICC profile for RGB or CMYK.',
  );
}

function sameBytes(one: Uint8Array, other: Uint8Array): boolean {
  return Buffer.compare(one, other) === 0;
}
