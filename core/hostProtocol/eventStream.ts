/** One server-sent event: its name and its data, parsed from JSON. */
export interface StreamEvent {
  name: string;
  data: unknown;
}

/**
 * Reads server-sent events (WHATWG HTML, §9.2) from a fetch response; `EventSource` cannot send headers
 * and does not know every scheme. Fields other than `event` and `data` are passed over.
 * @param body the response's body
 * @yields each event whose data is JSON, in order; ends with the stream
 */
export async function* readEvents(body: ReadableStream<Uint8Array>): AsyncGenerator<StreamEvent> {
  const reader = body.getReader();
  const decoder = new TextDecoder();
  let pending = '';
  try {
    for (;;) {
      const { done, value } = await reader.read();
      pending += done ? decoder.decode() : decoder.decode(value, { stream: true });
      const blocks = pending.split(/\r\n\r\n|\n\n|\r\r/);
      // An event that the stream breaks off in the middle of is dropped, as the standard says.
      pending = blocks.pop() ?? '';
      for (const block of blocks) {
        const event = parseBlock(block);
        if (event) yield event;
      }
      if (done) return;
    }
  } finally {
    await reader.cancel().catch(() => undefined);
  }
}

function parseBlock(block: string): StreamEvent | null {
  let name = 'message';
  const data: string[] = [];
  for (const line of block.split(/\r\n|\n|\r/)) {
    const colon = line.indexOf(':');
    if (colon <= 0) continue;
    const value = line.slice(colon + 1).replace(/^ /, '');
    const field = line.slice(0, colon);
    if (field === 'event') name = value;
    if (field === 'data') data.push(value);
  }
  return data.length > 0 ? { name, data: JSON.parse(data.join('\n')) } : null;
}
