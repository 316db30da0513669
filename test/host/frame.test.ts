import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readEvents } from '../../core/hostProtocol/eventStream.ts';
import { decodeFrame, encodeFrame } from '../../core/hostProtocol/frame.ts';
import { readBody } from '../../core/hostProtocol/readBody.ts';

const planes = {
  ground: Uint8Array.from([1, 2, 3]),
  body: Uint16Array.from([65535, 7]),
  line: new Uint8Array(0),
};

describe('frames of pixels', () => {
  it('come back as they were sent, for any header and planes', () => {
    fc.assert(
      fc.property(
        fc.dictionary(fc.constantFrom('a', 'ü', 'long name'), fc.jsonValue()),
        fc.array(fc.oneof(fc.uint8Array({ maxLength: 50 }), fc.uint16Array({ maxLength: 50 })), {
          maxLength: 4,
        }),
        (header, arrays) => {
          const sent = Object.fromEntries(arrays.map((array, i) => [`plane${i}`, array]));
          const frame = encodeFrame(header, sent);
          const { planes: received, header: read } = decodeFrame<object>(frame.buffer);
          expect(received).toEqual(sent);
          const { planes: _places, ...own } = read as Record<string, unknown>;
          expect(own).toEqual(JSON.parse(JSON.stringify(header)));
        },
      ),
    );
  });

  it('are views of the buffer they arrived in, shared memory too', () => {
    const frame = encodeFrame({}, planes);
    const shared = new SharedArrayBuffer(frame.byteLength + 100);
    new Uint8Array(shared).set(frame);
    const decoded = decodeFrame(shared, frame.byteLength);
    expect(decoded.planes.body?.buffer).toBe(shared);
    expect(Array.from(decoded.planes.body ?? [])).toEqual([65535, 7]);
  });

  it('are refused when cut off anywhere', () => {
    const frame = encodeFrame({ photoId: 'p' }, { ground: planes.ground, body: planes.body });
    for (let length = 0; length < frame.byteLength; length += 1)
      expect(() => decodeFrame(frame.buffer.slice(0, length)), String(length)).toThrow(RangeError);
  });
});

describe('bodies of known length', () => {
  const respond = (chunks: number[][], length: number) =>
    new Response(
      new ReadableStream({
        start(controller) {
          for (const chunk of chunks) controller.enqueue(Uint8Array.from(chunk));
          controller.close();
        },
      }),
      { headers: { 'content-length': String(length) } },
    );

  it('are read into memory that is there already', async () => {
    const kept = new ArrayBuffer(16);
    const { buffer, lengthBytes } = await readBody(respond([[1, 2], [3]], 3), () => kept);
    expect(buffer).toBe(kept);
    expect([...new Uint8Array(buffer, 0, lengthBytes)]).toEqual([1, 2, 3]);
  });

  it('are refused when shorter or longer than they said', async () => {
    await expect(readBody(respond([[1, 2]], 3))).rejects.toThrow(RangeError);
    await expect(readBody(respond([[1, 2, 3, 4]], 3))).rejects.toThrow(RangeError);
  });
});

describe('server-sent events (WHATWG HTML, section 9.2)', () => {
  it('are read across chunk borders; comments and broken-off events are passed over', async () => {
    const text = ': hello\n\nevent: progress\ndata: {"n":\ndata: 1}\n\ndata: 2\r\n\r\nevent: lost\ndata: 3\n';
    for (let step = 1; step < 9; step += 1) {
      const bytes = new TextEncoder().encode(text);
      const body = new ReadableStream<Uint8Array>({
        start(controller) {
          for (let at = 0; at < bytes.length; at += step) controller.enqueue(bytes.slice(at, at + step));
          controller.close();
        },
      });
      const events = [];
      for await (const event of readEvents(body)) events.push(event);
      expect(events, `${step} bytes at a time`).toEqual([
        { name: 'progress', data: { n: 1 } },
        { name: 'message', data: 2 },
      ]);
    }
  });
});
