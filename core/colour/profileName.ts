import { tagOf } from './matrixProfile.ts';

/*
 * The name that a profile goes by (ICC.1:2010): text in `desc`, of version 2 (textDescriptionType, ICC.1:2001 6.5.17) or 4
 * (multiLocalizedUnicodeType, 10.13).
 */

/**
 * What a profile calls itself, in English where it has that.
 * @param profile the bytes of an ICC profile; not modified
 * @returns null where it does not say
 */
export function profileName(profile: Uint8Array): string | null {
  const tag = tagOf(profile, 'desc');
  if (!tag || tag.length < 12) return null;
  const kind = latin(tag.subarray(0, 4));
  const name = kind === 'desc' ? plainName(tag) : kind === 'mluc' ? localizedName(tag) : null;
  return name?.replaceAll('\0', '').trim() || null;
}

function plainName(tag: Uint8Array): string {
  return latin(tag.subarray(12, 12 + viewOf(tag).getUint32(8)));
}

function localizedName(tag: Uint8Array): string | null {
  if (tag.length < 28) return null;
  const view = viewOf(tag);
  const count = Math.min(view.getUint32(8), Math.floor((tag.length - 16) / 12));
  const records = Array.from({ length: count }, (_, index) => 16 + 12 * index);
  const english = records.find((at) => latin(tag.subarray(at, at + 2)) === 'en');
  const chosen = english ?? records[0];
  if (chosen === undefined) return null;
  const [length, from] = [view.getUint32(chosen + 4), view.getUint32(chosen + 8)];
  return new TextDecoder('utf-16be').decode(tag.subarray(from, from + length));
}

function latin(bytes: Uint8Array): string {
  return String.fromCharCode(...bytes.subarray(0, 256));
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}
