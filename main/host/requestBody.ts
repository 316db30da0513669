import { Refusal } from './refusal.ts';

/**
 * Reads a JSON body, giving up as soon as it proves larger than it may be.
 * @throws Refusal where it is too large, says it is something else, or is no JSON
 */
export async function readJsonBody(request: Request, limitBytes: number): Promise<unknown> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^application\/json\s*(;|$)/i.test(type))
    throw new Refusal('BadRequest', `Expected application/json, received ${type || 'no content type'}.`);
  const text = await readText(request, limitBytes);
  try {
    return JSON.parse(text);
  } catch (cause) {
    throw new Refusal('BadRequest', 'Expected JSON, received something else.', '', { cause });
  }
}

async function readText(request: Request, limitBytes: number): Promise<string> {
  const tooLarge = () => new Refusal('TooLarge', `Expected at most ${limitBytes} bytes, received more.`);
  // What the header says is only good for refusing early; what arrives is counted all the same.
  if (Number(request.headers.get('content-length') ?? 0) > limitBytes) throw tooLarge();
  if (!request.body) return '';
  const chunks: Uint8Array[] = [];
  let lengthBytes = 0;
  for await (const chunk of request.body) {
    lengthBytes += chunk.byteLength;
    if (lengthBytes > limitBytes) throw tooLarge();
    chunks.push(chunk);
  }
  return new TextDecoder().decode(Buffer.concat(chunks));
}
