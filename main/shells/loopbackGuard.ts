import { createHash, randomBytes, timingSafeEqual } from 'node:crypto';

/** Path of the one-time address. */
const openPath = '/open';

/**
 * Decides who may speak to the loopback server. Any page in any browser, and any program, can reach a port of
 * this machine; only the window that was opened with the one-time address may use it.
 *
 * The address is exchanged once for a cookie that scripts cannot read. Host must be the server's own, so that
 * a foreign name pointed at this machine is refused; Origin must be the server's own wherever a browser sends
 * one, and must be sent with whatever changes something.
 */
export class LoopbackGuard {
  readonly #openKey = randomBytes(32).toString('base64url');
  readonly #token = randomBytes(32).toString('base64url');
  #opened = false;

  constructor(private readonly port: number) {}

  get origin(): string {
    return `http://127.0.0.1:${this.port}`;
  }

  /** The address that lets one window in, once. */
  get oneTimeUrl(): string {
    return `${this.origin}${openPath}?key=${this.#openKey}`;
  }

  /** @returns the refusal, or the answer to the one-time address; null where the request may go on */
  check(request: Request): Response | null {
    const { headers, method } = request;
    if (headers.get('host') !== `127.0.0.1:${this.port}`) return refuse('This is not the address of Oxgall.');
    const origin = headers.get('origin');
    const reads = method === 'GET' || method === 'HEAD';
    if (origin === null ? !reads : origin !== this.origin)
      return refuse('This page may not speak to Oxgall.');
    const site = headers.get('sec-fetch-site');
    if (site !== null && site !== 'same-origin' && site !== 'none')
      return refuse('Another page may not speak to Oxgall.');
    const url = new URL(request.url);
    if (url.pathname === openPath) return this.#letIn(url.searchParams.get('key') ?? '', reads);
    if (!same(this.#cookieOf(request), this.#token))
      return refuse('This window was not opened by Oxgall, or Oxgall has been started again since.');
    return null;
  }

  #letIn(key: string, reads: boolean): Response {
    if (!reads || this.#opened || !same(key, this.#openKey))
      return refuse('This address lets one window in, once. Start Oxgall again for a new one.');
    this.#opened = true;
    const cookie = `${this.#cookieName}=${this.#token}; Path=/; HttpOnly; SameSite=Strict`;
    return new Response(null, {
      status: 303,
      headers: { location: '/', 'set-cookie': cookie, 'cache-control': 'no-store' },
    });
  }

  /** Cookies know no ports: the name keeps two programs that run at once apart. */
  get #cookieName(): string {
    return `oxgall-${this.port}`;
  }

  #cookieOf(request: Request): string {
    const pairs = (request.headers.get('cookie') ?? '').split(';').map((pair) => pair.trim());
    const mine = pairs.find((pair) => pair.startsWith(`${this.#cookieName}=`));
    return mine?.slice(this.#cookieName.length + 1) ?? '';
  }
}

/** Compares in a time that tells nothing about where two texts differ. */
function same(a: string, b: string): boolean {
  const digest = (text: string) => createHash('sha256').update(text).digest();
  return timingSafeEqual(digest(a), digest(b));
}

function refuse(message: string): Response {
  const remedy = 'Use the window that Oxgall opened.';
  const error = { name: 'NotAllowed', message, remedy, callId: '' };
  return new Response(JSON.stringify({ error }), {
    status: 403,
    headers: { 'content-type': 'application/json; charset=utf-8', 'cache-control': 'no-store' },
  });
}
