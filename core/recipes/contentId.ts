import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js';
import { canonicalJson } from './canonicalJson.ts';

/** What an id looks like: a SHA-256 in lower-case hexadecimal. */
export const contentIdPattern = /^[0-9a-f]{64}$/;

/**
 * SHA-256 of bytes, or of a text's UTF-8.
 * @returns 64 lower-case hexadecimal digits
 * Source: FIPS 180-4.
 */
export function sha256Hex(content: Uint8Array | string): string {
  return bytesToHex(sha256(typeof content === 'string' ? utf8ToBytes(content) : content));
}

/**
 * Names a JSON value by its content: the SHA-256 of its canonical text.
 * @param value as for `canonicalJson`
 * @returns 64 lower-case hexadecimal digits, the same for any key order and number spelling
 */
export function contentId(value: unknown): string {
  return sha256Hex(canonicalJson(value));
}
