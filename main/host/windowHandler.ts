import type { Host } from './host.ts';
import { withSecurityHeaders } from './securityHeaders.ts';
import { serveWindowFile, type WindowFolders } from './windowFiles.ts';

/** Everything a window asks for: the host's API and the interface's own files, one handler for both shells. */
export function createWindowHandler(
  host: Host,
  folders: WindowFolders,
): (request: Request) => Promise<Response> {
  return async (request) => {
    const isApi = new URL(request.url).pathname.startsWith('/api/');
    return withSecurityHeaders(await (isApi ? host.fetch(request) : serveWindowFile(request, folders)));
  };
}
