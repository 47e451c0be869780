import { once } from 'node:events';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import express from 'express';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { receiveFile } from '../../../server/api/receive-file.ts';
import { BadInputError } from '../../../server/errors.ts';

let server: Server;
let url: string;

beforeEach(async () => {
  const app = express();
  app.post('/', async (request, response) => {
    try {
      response.json({ text: (await receiveFile(request, response, 'file', 2 ** 20)).toString() });
    } catch (error) {
      if (!(error instanceof BadInputError)) throw error;
      response.status(422).json(error.errors);
    }
  });
  server = createServer(app).listen(0, '127.0.0.1');
  await once(server, 'listening');
  url = `http://127.0.0.1:${(server.address() as AddressInfo).port}/`;
});

afterEach(async () => {
  server.closeAllConnections();
  server.close();
  await once(server, 'close');
});

async function post(body: FormData | string, headers: Record<string, string> = {}) {
  const response = await fetch(url, { method: 'POST', body, headers });
  return { status: response.status, body: (await response.json()) as unknown };
}

function form(field: string, text: string): FormData {
  const data = new FormData();
  data.append(field, new Blob([text], { type: 'text/csv' }), 'tests.csv');
  return data;
}

describe('receiving a file', () => {
  it('gives its bytes', async () => {
    expect(await post(form('file', 'at,quantity'))).toEqual({ status: 200, body: { text: 'at,quantity' } });
  });

  it.each<[string, FormData | string, Record<string, string>, string]>([
    ['a file over the limit', form('file', 'x'.repeat(2 ** 20 + 1)), {}, 'larger than 1 MB'],
    ['a file in another field', form('other', 'x'), {}, 'broken'],
    ['no multipart at all', '{}', { 'Content-Type': 'application/json' }, 'Send a file'],
    ['multipart without its boundary', 'x', { 'Content-Type': 'multipart/form-data' }, 'broken'],
    [
      'multipart that breaks off',
      '--b\r\nContent-Disposition: form-data; name="file"; filename="a"\r\n\r\nx',
      { 'Content-Type': 'multipart/form-data; boundary=b' },
      'broken',
    ],
  ])('refuses %s', async (_, body, headers, message) => {
    const answer = await post(body, headers);
    expect(answer.status).toBe(422);
    expect(answer.body).toEqual([{ path: 'file', message: expect.stringContaining(message) as string }]);
  });
});
