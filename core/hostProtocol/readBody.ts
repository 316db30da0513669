/** A place for `lengthBytes` bytes: new memory, or some kept from an earlier answer. */
export type MakeRoom = (lengthBytes: number) => ArrayBuffer | SharedArrayBuffer;

/**
 * Reads a body of known length straight into memory of the caller's choice.
 * @param response its Content-Length must be right
 * @param makeRoom asked once; may hand out a larger buffer than needed
 * @returns the buffer and how much of it the body fills
 * @throws RangeError where the body is shorter or longer than it said
 */
export async function readBody(
  response: Response,
  makeRoom: MakeRoom = (lengthBytes) => new ArrayBuffer(lengthBytes),
): Promise<{ buffer: ArrayBuffer | SharedArrayBuffer; lengthBytes: number }> {
  const lengthBytes = Number(response.headers.get('content-length') ?? Number.NaN);
  if (!Number.isInteger(lengthBytes) || !response.body) {
    const whole = await response.arrayBuffer();
    return { buffer: whole, lengthBytes: whole.byteLength };
  }
  const buffer = makeRoom(lengthBytes);
  const bytes = new Uint8Array(buffer);
  const reader = response.body.getReader();
  let filledBytes = 0;
  for (;;) {
    const { done, value } = await reader.read();
    if (done) break;
    if (filledBytes + value.byteLength > lengthBytes) {
      await reader.cancel();
      throw new RangeError(`Expected ${lengthBytes} bytes, received more`);
    }
    bytes.set(value, filledBytes);
    filledBytes += value.byteLength;
  }
  if (filledBytes < lengthBytes)
    throw new RangeError(`Expected ${lengthBytes} bytes, received ${filledBytes}`);
  return { buffer, lengthBytes };
}
