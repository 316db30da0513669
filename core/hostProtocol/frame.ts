/**
 * The binary body in which pixels travel between host and interface: a JSON header that names the planes,
 * then the planes themselves, each at an offset its element type can be viewed at without a copy.
 *
 * Layout, little-endian: `OXG1` · uint32 length of the header in bytes · header (UTF-8 JSON, padded with
 * spaces) · planes. Plane offsets count from the start of the frame.
 */
export type PlaneType = 'u8' | 'u16';

/** Where one plane lies in its frame. */
export interface PlanePlace {
  name: string;
  type: PlaneType;
  /** Counted from the start of the frame. */
  offsetBytes: number;
  lengthBytes: number;
}

/** What every frame's header holds besides its own fields. */
export interface FrameHeader {
  planes: PlanePlace[];
}

/** A decoded frame; the planes are views of the buffer it arrived in. */
export interface Frame<Header> {
  header: Header & FrameHeader;
  /** By name; a plane that was left out is absent. */
  planes: Record<string, Uint8Array | Uint16Array | undefined>;
}

const magic = 0x31_47_58_4f;
const alignmentBytes = 8;
const prefixBytes = 8;
/** No header of ours comes near this; a longer one is a broken frame. */
const maximumHeaderBytes = 1 << 20;

const aligned = (bytes: number) => Math.ceil(bytes / alignmentBytes) * alignmentBytes;

/**
 * Packs planes into one buffer.
 * @param header the frame's own fields, plain JSON; not modified
 * @param planes name → pixels, in the order they shall be sent; not modified
 * @returns a new buffer, its length the body's Content-Length
 */
export function encodeFrame<Header extends object>(
  header: Header,
  planes: Record<string, Uint8Array | Uint16Array>,
): Uint8Array<ArrayBuffer> {
  // Offsets are part of the header whose length they depend on: the header is written once with the
  // offsets counted from its end, then padded so that the digits of the true offsets fit.
  const entries = Object.entries(planes);
  const place = (startBytes: number): PlanePlace[] => {
    let offsetBytes = startBytes;
    return entries.map(([name, pixels]) => {
      const type: PlaneType = pixels instanceof Uint16Array ? 'u16' : 'u8';
      const found = { name, type, offsetBytes, lengthBytes: pixels.byteLength };
      offsetBytes = aligned(offsetBytes + pixels.byteLength);
      return found;
    });
  };
  const write = (startBytes: number) =>
    new TextEncoder().encode(JSON.stringify({ ...header, planes: place(startBytes) }));
  const spareBytes = entries.length * 8;
  const startBytes = aligned(prefixBytes + write(0).byteLength + spareBytes);
  const text = write(startBytes);
  const places = place(startBytes);
  const last = places.at(-1);
  const frame = new Uint8Array(last ? last.offsetBytes + last.lengthBytes : startBytes);
  const view = new DataView(frame.buffer);
  view.setUint32(0, magic, true);
  view.setUint32(4, startBytes - prefixBytes, true);
  frame.fill(0x20, prefixBytes, startBytes);
  frame.set(text, prefixBytes);
  for (const [index, [, pixels]] of entries.entries()) {
    const bytes = new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength);
    frame.set(bytes, places[index].offsetBytes);
  }
  return frame;
}

/**
 * Opens a frame without copying its planes.
 * @param buffer holds the frame from its first byte; may be longer than the frame
 * @param lengthBytes how much of `buffer` arrived
 * @returns the header and views of the planes; they live as long as `buffer` is left alone
 * @throws RangeError where the bytes are no frame, or a plane lies outside of them
 */
export function decodeFrame<Header>(
  buffer: ArrayBuffer | SharedArrayBuffer,
  lengthBytes: number = buffer.byteLength,
): Frame<Header> {
  const refuse = (why: string): never => {
    throw new RangeError(`Expected a frame of pixels, received ${why}`);
  };
  if (lengthBytes < prefixBytes) refuse(`${lengthBytes} bytes`);
  const view = new DataView(buffer, 0, lengthBytes);
  if (view.getUint32(0, true) !== magic) refuse('other bytes');
  const headerBytes = view.getUint32(4, true);
  if (headerBytes > maximumHeaderBytes || prefixBytes + headerBytes > lengthBytes)
    refuse(`a header of ${headerBytes} bytes`);
  // TextDecoder refuses views of shared memory, so the header is copied; it is small.
  const text = new TextDecoder().decode(new Uint8Array(buffer, prefixBytes, headerBytes).slice());
  const header = JSON.parse(text) as Header & FrameHeader;
  const planes: Frame<Header>['planes'] = {};
  for (const { name, type, offsetBytes, lengthBytes: planeBytes } of header.planes) {
    if (offsetBytes % alignmentBytes !== 0 || offsetBytes + planeBytes > lengthBytes)
      refuse(`a plane ${name} that ends at byte ${offsetBytes + planeBytes} of ${lengthBytes}`);
    planes[name] =
      type === 'u16'
        ? new Uint16Array(buffer, offsetBytes, planeBytes / 2)
        : new Uint8Array(buffer, offsetBytes, planeBytes);
  }
  return { header, planes };
}
