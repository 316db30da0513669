import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { commandSchemas, commonBodyLimitBytes } from '../../main/host/api/commandSchemas.ts';
import { base, makeTestHost, type TestHost } from './testHost.ts';

let t: TestHost;
beforeAll(async () => {
  t = await makeTestHost();
});
afterAll(() => t.close());

async function refused(response: Response) {
  const { error } = (await response.json()) as { error: { name: string; message: string; remedy: string } };
  return { status: response.status, ...error };
}

describe('requests the host does not take', () => {
  it('refuses what is no JSON, or says it is something else', async () => {
    expect(await refused(await t.post('startSession', '{'))).toMatchObject({
      status: 400,
      name: 'BadRequest',
    });
    expect(await refused(await t.post('startSession', '{}', { 'content-type': 'text/plain' }))).toMatchObject(
      { status: 400, name: 'BadRequest' },
    );
  });

  it('refuses unknown commands and other methods', async () => {
    for (const name of ['nothing', 'constructor', '__proto__', 'hasOwnProperty'])
      expect(await refused(await t.post(name, {})), name).toMatchObject({ status: 404, name: 'NotFound' });
    for (const method of ['GET', 'PUT', 'DELETE', 'OPTIONS']) {
      const response = await t.host.fetch(new Request(`${base}/api/startSession`, { method }));
      expect(response.status, method).toBe(404);
      expect(response.headers.get('access-control-allow-origin'), method).toBeNull();
    }
  });

  it('refuses a body that is too large, whatever its length says', async () => {
    const large = JSON.stringify({ path: 'x'.repeat(commonBodyLimitBytes) });
    expect(await refused(await t.post('openPhoto', large))).toMatchObject({ status: 413, name: 'TooLarge' });
    const chunk = new TextEncoder().encode('x'.repeat(16 * 1024));
    let sentBytes = 0;
    const endless = new ReadableStream<Uint8Array>({
      pull(controller) {
        sentBytes += chunk.byteLength;
        controller.enqueue(chunk);
      },
    });
    const request = new Request(`${base}/api/openPhoto`, {
      method: 'POST',
      headers: { 'content-type': 'application/json' },
      body: endless,
      duplex: 'half',
    } as RequestInit);
    expect(await refused(await t.host.fetch(request))).toMatchObject({ status: 413, name: 'TooLarge' });
    expect(sentBytes).toBeLessThan(2 * commonBodyLimitBytes);
  });

  it('refuses fields it does not know, wrong types and values out of bounds, and says where', async () => {
    const bad: [string, unknown, string][] = [
      ['openPhoto', { path: 7 }, 'path'],
      ['openPhoto', { path: '/a', more: true }, 'more'],
      ['openPhoto', [], 'openPhoto'],
      ['paintStrata', { photoId: 'a', parameters: {}, level: -1, view: 'v' }, 'level'],
      ['paintStrata', { photoId: 'a', parameters: {}, level: 1.5, view: 'v' }, 'level'],
      ['paintStrata', { photoId: 'a', parameters: { k: {} }, level: 0, view: 'v' }, 'parameters'],
      ['paintSmallPicture', { photoId: 'a', parameters: {}, longEdgePx: 100_000 }, 'longEdgePx'],
      [
        'savePainting',
        { photoId: 'a', parameters: {}, folder: '/', name: 'x', output: { format: 'exe' } },
        'format',
      ],
    ];
    for (const [name, input, where] of bad) {
      const answer = await refused(await t.post(name, input));
      expect(answer, name).toMatchObject({ status: 400, name: 'BadRequest' });
      expect(answer.message).toContain(where);
    }
  });

  it('gives every command something that is not an object without falling over', async () => {
    for (const name of Object.keys(commandSchemas))
      for (const input of [null, 'text', 7, [], [[]]])
        expect((await t.post(name, input)).status, `${name} ${JSON.stringify(input)}`).toBe(400);
  });

  it('refuses a call id that is in use and one that is no plain word', async () => {
    const headers = { 'x-oxgall-call': 'one' };
    const slow = await makeTestHost({ loadStores: () => new Promise(() => undefined) });
    void slow.post('startSession', {}, headers);
    expect(await refused(await slow.post('listRecents', {}, headers))).toMatchObject({ name: 'BadRequest' });
    expect(await refused(await t.post('listRecents', {}, { 'x-oxgall-call': 'a b' }))).toMatchObject({
      name: 'BadRequest',
    });
    expect((await t.post('listRecents', {}, headers)).headers.get('x-oxgall-call')).toBe('one');
    await slow.close();
  });

  it('lets eight windows listen and no ninth', async () => {
    const controller = new AbortController();
    const listen = () => t.host.fetch(new Request(`${base}/api/events`, { signal: controller.signal }));
    for (let i = 0; i < 8; i += 1) expect((await listen()).status).toBe(200);
    expect((await listen()).status).toBe(413);
    controller.abort();
    expect((await listen()).status).toBe(200);
  });
});
