import { readFile } from 'node:fs/promises';
import { extname, join, sep } from 'node:path';

/** What a window may load; anything else in the folder is not ours. */
const contentTypes: Record<string, string> = {
  '.css': 'text/css; charset=utf-8',
  '.html': 'text/html; charset=utf-8',
  '.ico': 'image/x-icon',
  '.jpg': 'image/jpeg',
  '.js': 'text/javascript; charset=utf-8',
  '.json': 'application/json; charset=utf-8',
  '.png': 'image/png',
  '.svg': 'image/svg+xml',
  '.wasm': 'application/wasm',
  '.webp': 'image/webp',
  '.woff': 'font/woff',
  '.woff2': 'font/woff2',
};

/** Where the built interface and the kernels lie. */
export interface WindowFolders {
  rendererFolder: string;
  kernelsFile: string;
}

/**
 * Serves the interface's own files.
 * @returns 404 for whatever is not a file of the interface, however the path is written
 */
export async function serveWindowFile(request: Request, folders: WindowFolders): Promise<Response> {
  if (request.method !== 'GET' && request.method !== 'HEAD') return plain(405, 'Method not allowed');
  const path = filePath(new URL(request.url).pathname, folders);
  const type = path && contentTypes[extname(path).toLowerCase()];
  if (!path || !type) return plain(404, 'There is nothing here.');
  try {
    const content = await readFile(path);
    const headers = {
      'content-type': type,
      'content-length': String(content.byteLength),
      // The next version of the program answers at the same address.
      'cache-control': 'no-cache',
    };
    return new Response(request.method === 'HEAD' ? null : new Uint8Array(content), { headers });
  } catch {
    return plain(404, 'There is nothing here.');
  }
}

/** Each part of the path must be a plain name, so that none can lead out of the folder. */
function filePath(pathname: string, { rendererFolder, kernelsFile }: WindowFolders): string | null {
  if (pathname === '/kernels.wasm') return kernelsFile;
  let decoded: string;
  try {
    decoded = decodeURIComponent(pathname);
  } catch {
    return null;
  }
  const parts = (decoded === '/' ? '/index.html' : decoded).split('/').slice(1);
  if (!parts.every((part) => /^[\w@-][\w.@-]*$/.test(part))) return null;
  const path = join(rendererFolder, ...parts);
  return path.startsWith(rendererFolder.endsWith(sep) ? rendererFolder : rendererFolder + sep) ? path : null;
}

function plain(status: number, text: string): Response {
  return new Response(text, { status, headers: { 'content-type': 'text/plain; charset=utf-8' } });
}
