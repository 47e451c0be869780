import { existsSync, statSync } from 'node:fs';
import path from 'node:path';
import express, { type Request, type RequestHandler, Router } from 'express';

const YEAR_MS = 365 * 86_400_000;
const siblings = [
  { encoding: 'br', ending: '.br' },
  { encoding: 'gzip', ending: '.gz' },
];

function isFile(file: string): boolean {
  return statSync(file, { throwIfNoEntry: false })?.isFile() === true;
}

/** The copy that the build compressed, when the client takes it: only what is named in the folder, never above it. */
function compressedSibling(folder: string, request: Request): { encoding: string; ending: string } | null {
  let name: string;
  try {
    name = decodeURIComponent(request.path === '/' ? '/index.html' : request.path);
  } catch {
    // A path that is no URL has no file; the static handler answers it.
    return null;
  }
  if (name.includes('\0')) return null;
  const file = path.join(folder, path.normalize(name));
  if (!file.startsWith(folder + path.sep) || path.extname(name) === '') return null;
  for (const sibling of siblings) {
    if (request.acceptsEncodings(sibling.encoding) !== false && isFile(file + sibling.ending)) return sibling;
  }
  return null;
}

function preferCompressed(folder: string): RequestHandler {
  return (request, response, next) => {
    if (request.method !== 'GET' && request.method !== 'HEAD') return next();
    const sibling = compressedSibling(folder, request);
    if (sibling === null) return next();
    const name = request.path === '/' ? '/index.html' : request.path;
    response.vary('Accept-Encoding').set('Content-Encoding', sibling.encoding).type(path.extname(name));
    request.url = name + sibling.ending;
    next();
  };
}

/** Names under these folders hold a hash of their content. */
function cacheControlOf(folder: string, file: string): string {
  const below = path.relative(folder, file);
  return /^(_expo|assets)[/\\]/.test(below) ? `public, max-age=${YEAR_MS / 1000}, immutable` : 'no-cache';
}

/** True for what a person opens in the browser: no file name, and HTML wanted. */
function isPage(request: Request): boolean {
  const isRead = request.method === 'GET' || request.method === 'HEAD';
  return isRead && path.extname(request.path) === '' && (request.headers.accept ?? '').includes('text/html');
}

/** The web app: its files, and its one page for every address that is no file. */
export function staticApp(folder: string): Router {
  const router = Router();
  const files = express.static(folder, {
    index: 'index.html',
    redirect: false,
    setHeaders: (response, file) => void response.setHeader('Cache-Control', cacheControlOf(folder, file)),
  });
  const compressed = preferCompressed(folder);
  router.use(compressed, files);
  router.use((request, response, next) => {
    if (!isPage(request) || !existsSync(path.join(folder, 'index.html'))) return next();
    request.url = '/index.html';
    compressed(request, response, () => files(request, response, next));
  });
  return router;
}
