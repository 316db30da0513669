import { FileError } from '../files/fileError.ts';

/** How the queue engine is told where Redis is. */
export interface QueueConnection {
  host: string;
  port: number;
  username?: string;
  password?: string;
  db?: number;
  tls?: object;
  maxRetriesPerRequest: null;
}

/** @throws FileError where the address is none of Redis */
export function readQueueAddress(address: string): QueueConnection {
  const url = URL.canParse(address) ? new URL(address) : null;
  if (url?.protocol !== 'redis:' && url?.protocol !== 'rediss:')
    throw new FileError(
      withoutPassword(address),
      'is no address of a queue',
      'Use one such as redis://localhost:6379.',
    );
  return {
    host: url.hostname || '127.0.0.1',
    port: Number(url.port || 6379),
    ...(url.username && { username: decodeURIComponent(url.username) }),
    ...(url.password && { password: decodeURIComponent(url.password) }),
    ...(url.pathname.length > 1 && { db: Number(url.pathname.slice(1)) }),
    ...(url.protocol === 'rediss:' && { tls: {} }),
    // Waits through a restart of Redis instead of giving up.
    maxRetriesPerRequest: null,
  };
}

/** An address as it may be shown. */
export function withoutPassword(address: string): string {
  return address.replace(/^([a-z]+:\/\/)[^@/]*@/i, '$1');
}

const patienceMs = 10_000;

/**
 * Waits for the first answer of Redis; later on, a restart is waited through.
 * @throws FileError where nobody answers
 */
export async function requireAnswer(address: string, ready: Promise<unknown>): Promise<void> {
  let timer: NodeJS.Timeout | undefined;
  const late = new Promise<'late'>((resolve) => {
    timer = setTimeout(() => resolve('late'), patienceMs);
  });
  const first = await Promise.race([ready, late]).finally(() => clearTimeout(timer));
  if (first !== 'late') return;
  throw new FileError(
    withoutPassword(address),
    'nobody answers there',
    'Start Redis, or check the address and the password.',
  );
}
