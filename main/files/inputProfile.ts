/** Four-letter signatures of the profile header (ICC.1, 7.2). */
function signature(profile: Uint8Array, at: number): string {
  return Buffer.from(profile.subarray(at, at + 4)).toString('latin1');
}

const headerBytes = 128;

/** The colour space a profile describes ("RGB ", "GRAY", "CMYK" …), or undefined where it is no sound profile. */
export function profileSpace(profile: Uint8Array): string | undefined {
  if (profile.length < headerBytes + 4 || signature(profile, 36) !== 'acsp') return undefined;
  const bytes = new DataView(profile.buffer, profile.byteOffset, profile.byteLength);
  const declaredBytes = bytes.getUint32(0);
  if (declaredBytes > profile.length || declaredBytes < headerBytes) return undefined;
  return signature(profile, 16);
}
