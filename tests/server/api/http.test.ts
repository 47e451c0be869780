import { createHash } from 'node:crypto';
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { request } from 'node:http';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { brotliCompressSync, gzipSync } from 'node:zlib';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestServer, type TestServer } from '../../helpers/server.ts';

const style = 'html, body { height: 100% }';
const index = `<!doctype html><html><head><style id="reset">${style}</style></head><body><div id="root"></div></body></html>`;
const script = `console.log(${JSON.stringify('drop '.repeat(400))})`;

let appFolder: string;
let server: TestServer;

function writeApp(): string {
  const folder = mkdtempSync(path.join(tmpdir(), 'steadfall-app-'));
  mkdirSync(path.join(folder, '_expo'));
  writeFileSync(path.join(folder, 'index.html'), index);
  writeFileSync(path.join(folder, '_expo', 'entry-1f.js'), script);
  writeFileSync(path.join(folder, '_expo', 'entry-1f.js.br'), brotliCompressSync(script));
  writeFileSync(path.join(folder, '_expo', 'entry-1f.js.gz'), gzipSync(script));
  return folder;
}

/** Without what `fetch` decides by itself: encodings, and the path as it is given. */
function get(
  target: string,
  headers: Record<string, string> = {},
): Promise<{ status: number; headers: Record<string, unknown>; body: Buffer }> {
  return new Promise((resolve, reject) => {
    const { hostname, port } = new URL(server.url);
    request({ hostname, port, path: target, headers }, (response) => {
      const parts: Buffer[] = [];
      response.on('data', (part: Buffer) => parts.push(part));
      response.on('end', () => resolve({ status: response.statusCode ?? 0, headers: response.headers, body: Buffer.concat(parts) }));
    })
      .on('error', reject)
      .end();
  });
}

beforeAll(async () => {
  appFolder = writeApp();
  server = await startTestServer({ appFolder });
});

afterAll(async () => {
  await server.close();
  rmSync(appFolder, { recursive: true });
});

describe('the app', () => {
  it('is one page for every address that a person opens, and is asked for anew each time', async () => {
    for (const target of ['/', '/watch/0190-some-id', '/sign-in?next=%2F']) {
      const page = await get(target, { accept: 'text/html,*/*' });
      expect(page.status).toBe(200);
      expect(page.body.toString()).toBe(index);
      expect(page.headers).toMatchObject({ 'cache-control': 'no-cache', 'content-type': 'text/html; charset=utf-8' });
    }
  });

  it('is no answer to a file that is missing, whatever the client accepts', async () => {
    for (const target of ['/canvaskit.wasm', '/_expo/gone.js']) {
      const missing = await get(target, { accept: 'text/html,*/*' });
      expect(missing.status).toBe(404);
      expect(missing.headers['content-type']).toMatch(/^application\/problem\+json/);
    }
    expect((await get('/watch', { accept: 'application/json' })).status).toBe(404);
  });

  it('sends the copies that the build compressed to whoever takes them', async () => {
    const plain = await get('/_expo/entry-1f.js');
    expect(plain.body.toString()).toBe(script);
    expect(plain.headers['cache-control']).toBe('public, max-age=31536000, immutable');
    const brotli = await get('/_expo/entry-1f.js', { 'accept-encoding': 'gzip, br' });
    expect(brotli.headers).toMatchObject({
      'content-encoding': 'br',
      'content-type': 'text/javascript; charset=utf-8',
      vary: expect.stringMatching(/Accept-Encoding/) as string,
    });
    expect(brotli.body).toEqual(brotliCompressSync(script));
    expect((await get('/_expo/entry-1f.js', { 'accept-encoding': 'gzip' })).headers['content-encoding']).toBe('gzip');
    expect((await get('/_expo/entry-1f.js', { 'accept-encoding': 'br;q=0, gzip;q=0' })).headers['content-encoding']).toBeUndefined();
  });

  it('gives nothing from outside its folder', async () => {
    for (const target of [
      '/../package.json',
      '/..%2fpackage.json',
      '/%2e%2e/package.json',
      '/_expo/..%5c..%5cpackage.json',
      '/%00.js',
      '/%zz.js',
    ]) {
      const answer = await get(target, { 'accept-encoding': 'br' });
      expect(answer.status).toBeGreaterThanOrEqual(400);
      expect(answer.status).toBeLessThan(500);
    }
  });
});

describe('the headers', () => {
  it('allow the app what it needs and nothing else', async () => {
    const policy = String((await get('/', { accept: 'text/html' })).headers['content-security-policy']);
    const directives = new Map(policy.split(';').map((part) => [part.split(' ')[0] ?? '', part]));
    const hash = createHash('sha256').update(style).digest('base64');
    expect(directives.get('style-src')).toBe(`style-src 'self' 'sha256-47DEQpj8HBSa+/TImW+5JCeuQeRkm5NMpJWZG3hSuFU=' 'sha256-${hash}'`);
    expect(directives.get('script-src')).toBe("script-src 'self' 'wasm-unsafe-eval'");
    expect(directives.get('connect-src')).toContain(`ws://127.0.0.1:${server.httpPort}`);
    expect(directives.get('object-src')).toBe("object-src 'none'");
    expect(directives.get('frame-ancestors')).toBe("frame-ancestors 'none'");
    expect(policy).not.toContain('unsafe-inline');
    expect(policy).not.toContain('upgrade-insecure-requests');
  });

  it('promise no HTTPS where there is none, and do not tell what the server is made of', async () => {
    const { headers } = await get('/');
    expect(headers['strict-transport-security']).toBeUndefined();
    expect(headers['x-powered-by']).toBeUndefined();
    expect(headers['x-content-type-options']).toBe('nosniff');
  });
});

describe('what is wrong with a request', () => {
  const post = (body: string, type = 'application/json') =>
    fetch(`${server.url}/api/auth/sign-in`, { method: 'POST', body, headers: { 'content-type': type } });

  it.each([
    ['broken JSON', '{"email":', 422],
    ['JSON that is no object', '"text"', 422],
    ['a list', '[]', 422],
    ['more than a megabyte', JSON.stringify({ email: 'x'.repeat(1_100_000) }), 413],
  ])('is told as problem details: %s', async (_, body, status) => {
    const response = await post(body);
    expect(response.status).toBe(status);
    expect(response.headers.get('content-type')).toMatch(/^application\/problem\+json/);
    expect(response.headers.get('cache-control')).toBe('no-store');
    expect(await response.json()).toMatchObject({ status, title: expect.any(String) as string, detail: expect.any(String) as string });
  });

  it('is told for a body that is no JSON at all', async () => {
    expect((await post('email=a', 'application/x-www-form-urlencoded')).status).toBe(422);
  });

  it('is told for an address that does not exist below /api, also to a browser', async () => {
    const response = await get('/api/nothing', { accept: 'text/html' });
    expect(response.status).toBe(404);
    expect(JSON.parse(response.body.toString())).toMatchObject({ status: 404 });
  });

  it('is told for a query that does not fit, by field', async () => {
    const { owner, siteId } = await server.household();
    const problem = await owner.api.problem('listAudit', { params: { siteId }, query: { limit: '501' } });
    expect(problem).toMatchObject({ status: 422, errors: [{ path: 'limit' }] });
    expect(await owner.api.problem('listAudit', { params: { siteId }, query: { cursor: 'made up' } })).toMatchObject({ status: 422 });
  });
});

describe('for whoever runs the server', () => {
  it('says that it lives, and what it waits for', async () => {
    expect(JSON.parse((await get('/api/health')).body.toString())).toEqual({ status: 'ok' });
    const ready = await get('/api/ready');
    expect(ready.status).toBe(200);
    expect(JSON.parse(ready.body.toString())).toMatchObject({ ready: true, checks: { database: true, demo: true } });
  });

  it('counts requests by endpoint for Prometheus', async () => {
    await server.api().raw('me');
    const { body } = await get('/api/metrics');
    expect(body.toString()).toMatch(/steadfall_http_request_seconds_count\{endpoint="me",status="401"\} [1-9]/);
  });

  it('tells nothing of that through a proxy', async () => {
    for (const target of ['/api/metrics', '/api/ready', '/api/health']) {
      expect((await get(target, { 'x-forwarded-for': '203.0.113.7' })).status).toBe(404);
    }
  });

  it('describes every endpoint in OpenAPI 3.1', async () => {
    const document = JSON.parse((await get('/api/openapi.json')).body.toString()) as { openapi: string; paths: Record<string, object> };
    expect(document.openapi).toBe('3.1.0');
    expect(document.paths['/api/systems/{systemId}/tests']).toHaveProperty('post.requestBody');
  });
});
