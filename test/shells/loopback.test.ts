import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import { request as httpRequest } from 'node:http';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { createWindowHandler } from '../../main/host/windowHandler.ts';
import { type LoopbackServer, serveOnLoopback } from '../../main/shells/loopbackServer.ts';
import { makePhoto, makeTestHost, type TestHost } from '../host/testHost.ts';

let t: TestHost;
let server: LoopbackServer;
let cookie: string;
let folder: string;

beforeAll(async () => {
  t = await makeTestHost();
  folder = await mkdtemp(join(tmpdir(), 'oxgall-window-files-'));
  const rendererFolder = join(folder, 'renderer');
  await mkdir(join(rendererFolder, 'assets'), { recursive: true });
  await writeFile(join(rendererFolder, 'index.html'), '<!doctype html><title>Oxgall</title>');
  await writeFile(join(rendererFolder, 'assets', 'main-1a_B.js'), 'export {};');
  await writeFile(join(rendererFolder, 'notes.txt'), 'not for the window');
  await writeFile(join(folder, 'secret.json'), '{}');
  await writeFile(join(folder, 'kernels.wasm'), '');
  const folders = { rendererFolder, kernelsFile: join(folder, 'kernels.wasm') };
  server = await serveOnLoopback(createWindowHandler(t.host, folders));
  const opened = await send('GET', server.oneTimeUrl.slice(server.origin.length), {});
  cookie = String(opened.headers['set-cookie']).split(';')[0];
});

afterAll(async () => {
  await server.close();
  await t.close();
  await rm(folder, { recursive: true, force: true });
});

interface Answer {
  status: number;
  headers: Record<string, string | string[] | undefined>;
  text: string;
}

/** Sends exactly what is written here: no address is tidied, no header added. */
function send(method: string, path: string, headers: Record<string, string>, body?: string): Promise<Answer> {
  const { port, host } = new URL(server.origin);
  return new Promise((resolve, reject) => {
    const sent = httpRequest({
      host: '127.0.0.1',
      port,
      method,
      path,
      setHost: false,
      headers: { host, ...headers },
    });
    sent.on('error', reject);
    sent.on('response', (response) => {
      let text = '';
      response.setEncoding('utf8').on('data', (chunk) => {
        text += chunk;
      });
      response.on('end', () =>
        resolve({ status: response.statusCode ?? 0, headers: response.headers, text }),
      );
    });
    sent.end(body);
  });
}

const json = { 'content-type': 'application/json' };
const own = () => ({ cookie, origin: server.origin, ...json });

describe('who may speak to the loopback server', () => {
  it('lets the window in that came by the one-time address, and no second one', async () => {
    expect((await send('POST', '/api/listRecents', own(), '{}')).status).toBe(200);
    expect((await send('GET', '/', { cookie })).text).toContain('Oxgall');
    const again = await send('GET', server.oneTimeUrl.slice(server.origin.length), {});
    expect(again.status).toBe(403);
    expect(again.headers['set-cookie']).toBeUndefined();
  });

  it('keeps the cookie from scripts and from other pages', async () => {
    const fresh = await serveOnLoopback(async () => new Response('x'));
    const response = await fetch(fresh.oneTimeUrl, { redirect: 'manual' });
    expect(response.status).toBe(303);
    expect(response.headers.get('location')).toBe('/');
    const set = response.headers.get('set-cookie') ?? '';
    expect(set).toContain('HttpOnly');
    expect(set).toContain('SameSite=Strict');
    await fresh.close();
  });

  it('refuses everything without the cookie or with another one', async () => {
    const { port } = new URL(server.origin);
    for (const other of ['', 'x=y', `oxgall-${port}=`, `oxgall-${port}=guess`, cookie.slice(0, -1)]) {
      const headers = { ...own(), cookie: other };
      expect((await send('POST', '/api/startSession', headers, '{}')).status, other).toBe(403);
      expect((await send('GET', '/api/events', { cookie: other })).status, other).toBe(403);
      expect((await send('GET', '/', { cookie: other })).status, other).toBe(403);
      expect((await send('GET', '/kernels.wasm', { cookie: other })).status, other).toBe(403);
    }
  });

  it('refuses a wrong one-time key without using the right one up', async () => {
    const fresh = await serveOnLoopback(async () => new Response('x'));
    expect((await fetch(`${fresh.origin}/open?key=guess`, { redirect: 'manual' })).status).toBe(403);
    expect((await fetch(fresh.oneTimeUrl, { redirect: 'manual' })).status).toBe(303);
    await fresh.close();
  });

  it('refuses a foreign Host', async () => {
    const { port } = new URL(server.origin);
    for (const host of ['evil.example', `evil.example:${port}`, `localhost:${port}`, '127.0.0.1', '[::1]'])
      expect((await send('POST', '/api/listRecents', { ...own(), host }, '{}')).status, host).toBe(403);
  });

  it('refuses a foreign Origin, and a change without any', async () => {
    const { port } = new URL(server.origin);
    const foreign = ['https://evil.example', `http://localhost:${port}`, 'null', `https://127.0.0.1:${port}`];
    for (const origin of foreign) {
      expect((await send('POST', '/api/listRecents', { ...own(), origin }, '{}')).status, origin).toBe(403);
      expect((await send('GET', '/', { cookie, origin })).status, origin).toBe(403);
    }
    expect((await send('POST', '/api/listRecents', { cookie, ...json }, '{}')).status).toBe(403);
    for (const site of ['cross-site', 'same-site'])
      expect((await send('GET', '/', { cookie, 'sec-fetch-site': site })).status, site).toBe(403);
  });

  it('answers no preflight and names no origin that may read', async () => {
    const answer = await send('OPTIONS', '/api/listRecents', {
      ...own(),
      'access-control-request-method': 'POST',
    });
    expect(answer.status).toBeGreaterThanOrEqual(400);
    const all = [answer, await send('POST', '/api/listRecents', own(), '{}')];
    for (const { headers } of all)
      expect(Object.keys(headers).filter((name) => name.startsWith('access-control-'))).toEqual([]);
  });
});

describe('what the server gives away', () => {
  it('serves the interface and nothing beside it, however the path is written', async () => {
    expect((await send('GET', '/assets/main-1a_B.js', { cookie })).headers['content-type']).toContain(
      'javascript',
    );
    const paths = [
      '/../secret.json',
      '/..%2fsecret.json',
      '/%2e%2e/secret.json',
      '/%2e%2e%2fsecret.json',
      '/assets/../../secret.json',
      '/assets/..%5c..%5csecret.json',
      '//secret.json',
      `/${folder}/secret.json`,
      `//${folder}/secret.json`,
      '/assets/main-1a_B.js%00.json',
      '/notes.txt',
      '/assets',
      '/assets/',
      '/%',
      '/.%2e/secret.json',
    ];
    for (const path of paths) {
      const { status, text } = await send('GET', path, { cookie });
      expect([400, 404], `${path} ${status}`).toContain(status);
      expect(text).not.toContain('not for the window');
    }
  });

  it('puts the security headers on every kind of answer', async () => {
    const answers = [
      await send('GET', '/', { cookie }),
      await send('GET', '/nothing.js', { cookie }),
      await send('GET', '/', {}),
      await send('POST', '/api/listRecents', own(), '{}'),
      await send('POST', '/api/listRecents', own(), '{'),
    ];
    expect(answers.map(({ status }) => status)).toEqual([200, 404, 403, 200, 400]);
    for (const { headers } of answers) {
      const policy = String(headers['content-security-policy']);
      expect(policy).toContain("default-src 'none'");
      expect(policy).toContain("script-src 'self' 'wasm-unsafe-eval'");
      expect(policy).not.toContain('unsafe-inline');
      expect(policy).not.toContain("'unsafe-eval'");
      expect(headers).toMatchObject({
        'cross-origin-opener-policy': 'same-origin',
        'cross-origin-embedder-policy': 'require-corp',
        'cross-origin-resource-policy': 'same-origin',
        'x-content-type-options': 'nosniff',
      });
    }
  });

  it('sends a frame with its length, and stops painting when the connection breaks', async () => {
    const path = await makePhoto(join(t.photos, 'heron.png'), 120, 80);
    await t.host.offerPath(path);
    const { photoId } = JSON.parse(
      (await send('POST', '/api/openPhoto', own(), JSON.stringify({ path }))).text,
    );
    const ask = JSON.stringify({ photoId, parameters: {}, level: 0, view: 'easel' });
    const whole = await fetch(`${server.origin}/api/paintStrata`, {
      method: 'POST',
      headers: own(),
      body: ask,
    });
    const bytes = await whole.arrayBuffer();
    expect(Number(whole.headers.get('content-length'))).toBe(bytes.byteLength);
    expect(bytes.byteLength).toBeGreaterThan(120 * 80 * 10);
    t.engine.pauseMs = 5;
    const controller = new AbortController();
    const broken = fetch(`${server.origin}/api/paintStrata`, {
      method: 'POST',
      headers: own(),
      body: ask,
      signal: controller.signal,
    });
    await expect.poll(() => t.engine.paintingsStarted).toBe(2);
    controller.abort();
    await expect(broken).rejects.toThrow();
    await expect.poll(() => t.engine.paintingsAborted).toBe(1);
  });

  it('forgets a listener whose window is gone', async () => {
    const controller = new AbortController();
    const listening = await fetch(`${server.origin}/api/events`, {
      headers: { cookie },
      signal: controller.signal,
    });
    const reader = listening.body!.getReader();
    expect(new TextDecoder().decode((await reader.read()).value)).toContain('listening');
    t.host.menu('undo');
    expect(new TextDecoder().decode((await reader.read()).value)).toContain('"undo"');
    controller.abort();
    await expect(reader.read()).rejects.toThrow();
  });
});
