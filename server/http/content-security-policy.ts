import { createHash } from 'node:crypto';
import type { IncomingMessage } from 'node:http';

/** React Native for Web starts with an empty style element, whose rules it inserts by script: the hash of the empty text. */
const emptyStyle = "'sha256-47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU='";

/** CSP hash sources of the inline style blocks of a page. */
export function inlineStyleHashes(html: string): string[] {
  return [...html.matchAll(/<style[^>]*>([\s\S]*?)<\/style>/g)].map(
    ([, text]) =>
      `'sha256-${createHash('sha256')
        .update(text ?? '')
        .digest('base64')}'`,
  );
}

/** Some browsers do not take `'self'` for the WebSocket of the same host, so it is named. */
function ownSocket(request: IncomingMessage): string {
  const host = request.headers.host ?? '';
  if (!/^[A-Za-z0-9.:[\]_-]+$/.test(host)) return "'self'";
  return `ws://${host} wss://${host}`;
}

/** Nothing from elsewhere, no inline script; WebAssembly for the dense traces. */
export function contentSecurityPolicy(indexHtml: string) {
  return {
    defaultSrc: ["'self'"],
    scriptSrc: ["'self'", "'wasm-unsafe-eval'"],
    scriptSrcAttr: ["'none'"],
    styleSrc: ["'self'", emptyStyle, ...inlineStyleHashes(indexHtml)],
    imgSrc: ["'self'", 'blob:', 'data:'],
    connectSrc: ["'self'", ownSocket],
    workerSrc: ["'self'"],
    objectSrc: ["'none'"],
    baseUri: ["'none'"],
    frameAncestors: ["'none'"],
    formAction: ["'self'"],
  };
}
