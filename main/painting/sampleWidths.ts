/** Samples of 8 bits with 16: 255 becomes 65535. */
export function widened(samples: Uint8Array | Uint16Array): Uint16Array {
  const wide = new Uint16Array(samples.length);
  for (let i = 0; i < samples.length; i++) wide[i] = samples[i] * 257;
  return wide;
}

/** Samples of 16 bits with 8, to the nearest. */
export function narrowed(samples: Uint8Array | Uint16Array): Uint8Array {
  const narrow = new Uint8Array(samples.length);
  for (let i = 0; i < samples.length; i++) narrow[i] = Math.round(samples[i] / 257);
  return narrow;
}
