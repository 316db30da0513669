/**
 * What a page of ours may do, in both shells: load from its own origin and talk to it, compile the kernels,
 * nothing else. Pictures the interface makes itself are blobs.
 */
export const contentSecurityPolicy = [
  "default-src 'none'",
  "script-src 'self' 'wasm-unsafe-eval'",
  "worker-src 'self'",
  "style-src 'self'",
  "font-src 'self'",
  "img-src 'self' blob: data:",
  "connect-src 'self'",
  "base-uri 'none'",
  "form-action 'none'",
  "frame-ancestors 'none'",
  "object-src 'none'",
].join('; ');

const headers: Record<string, string> = {
  'content-security-policy': contentSecurityPolicy,
  // Cross-origin isolation: the compositing worker shares memory with the page.
  'cross-origin-opener-policy': 'same-origin',
  'cross-origin-embedder-policy': 'require-corp',
  'cross-origin-resource-policy': 'same-origin',
  'x-content-type-options': 'nosniff',
  'x-frame-options': 'DENY',
  'referrer-policy': 'no-referrer',
  'permissions-policy': 'camera=(), display-capture=(), geolocation=(), microphone=(), payment=(), usb=()',
};

/** Gives a response of ours the headers that every answer carries. */
export function withSecurityHeaders(response: Response): Response {
  for (const [name, value] of Object.entries(headers)) response.headers.set(name, value);
  return response;
}
