import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { getRequestListener } from '@hono/node-server';
import { withSecurityHeaders } from '../host/securityHeaders.ts';
import { LoopbackGuard } from './loopbackGuard.ts';

/** A handler served on this machine alone. */
export interface LoopbackServer {
  readonly origin: string;
  readonly oneTimeUrl: string;
  close(): Promise<void>;
}

/** One window needs few connections; more are somebody else's. */
const maximumConnections = 64;

/**
 * Serves a handler on 127.0.0.1, on a port the system chooses, behind the guard.
 * @param handler sees only requests that the guard let through
 */
export async function serveOnLoopback(
  handler: (request: Request) => Promise<Response>,
): Promise<LoopbackServer> {
  let guard: LoopbackGuard | null = null;
  const answer = async (request: Request) => {
    const refusal = guard ? guard.check(request) : new Response(null, { status: 503 });
    return refusal ? withSecurityHeaders(refusal) : handler(request);
  };
  // The adapter's own Request and Response stay out of the globals: the host means the standard ones.
  const server = createServer(getRequestListener(answer, { overrideGlobalObjects: false }));
  server.maxConnections = maximumConnections;
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen({ host: '127.0.0.1', port: 0, exclusive: true }, resolve);
  });
  guard = new LoopbackGuard((server.address() as AddressInfo).port);
  return { origin: guard.origin, oneTimeUrl: guard.oneTimeUrl, close: () => closeServer(server) };
}

function closeServer(server: Server): Promise<void> {
  return new Promise((resolve) => {
    server.close(() => resolve());
    server.closeAllConnections();
  });
}
