import { env } from "#app/env.server.ts";

// Without an endpoint the SDK goes to the region's own address.
const store = env.S3_PUBLIC_ENDPOINT ? new URL(env.S3_PUBLIC_ENDPOINT).origin : `https://*.amazonaws.com`;
const github = new URL(env.GITHUB_AUTHORIZE_URL).origin;

/**
 * What a page may load. The store is named since files travel between it and the browser;
 * WebAssembly hashes uploads and unpacks view meshes; the sign-in form is answered by a
 * redirect to GitHub, which browsers count as a form's target.
 */
export function contentSecurityPolicy(nonce: string): string {
  return [
    "default-src 'none'",
    `script-src 'self' 'nonce-${nonce}' 'wasm-unsafe-eval'`,
    "style-src 'self'",
    `img-src 'self' data: blob: ${store}`,
    `connect-src 'self' blob: data: ${store}`,
    "font-src 'self'",
    "worker-src 'self' blob:",
    "manifest-src 'self'",
    `form-action 'self' ${github}`,
    "frame-ancestors 'none'",
    "base-uri 'none'",
    "object-src 'none'",
  ].join("; ");
}
