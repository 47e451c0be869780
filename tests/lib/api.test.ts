// @vitest-environment jsdom
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { endpoints } from '#shared/contract/endpoints.ts';
import { call } from '../../lib/api.ts';
import { ApiError, problemFrom, problemOf, problemSentence } from '../../lib/api-problem.ts';
import { connection } from '../../lib/connection.ts';
import { addressOf } from '../../lib/request.ts';
import { session } from '../../lib/session.ts';

const user = { id: '0190a000-0000-7000-8000-000000001000', email: 'owner@ternlane.example', name: 'Owner' };
const me = { ...user, memberships: [] };
const json = (body: unknown, status = 200) => new Response(JSON.stringify(body), { status });
const problem = (status: number, detail = 'Said why.') => json({ type: 'about:blank', title: 'No', status, detail }, status);

let answers: (() => Response | Promise<Response>)[];
const asked = vi.fn<(address: string, init: RequestInit) => Promise<Response>>();

beforeEach(() => {
  answers = [];
  asked.mockReset();
  asked.mockImplementation(() => {
    const next = answers.shift();
    return next === undefined ? Promise.reject(new Error('no answer prepared')) : Promise.resolve().then(next);
  });
  vi.stubGlobal('fetch', asked);
  session.accept({ accessToken: 'first', expiresIn: 900, user });
});
afterEach(() => vi.unstubAllGlobals());

const tokenOf = (nth: number) => new Headers(asked.mock.calls[nth]?.[1].headers).get('authorization');

describe('an address', () => {
  it('is filled from the endpoint table', () => {
    expect(addressOf(endpoints.getPoints, { params: { seriesId: 'a/b' }, query: { from: '1', to: '2', points: undefined } })).toBe(
      '/api/series/a%2Fb/points?from=1&to=2',
    );
  });

  it('is refused without its parameter', () => {
    expect(() => addressOf(endpoints.getSystem, {})).toThrow('systemId');
  });
});

describe('call', () => {
  it('sends the token and gives the checked answer', async () => {
    answers = [() => json(me)];
    expect(await call('me')).toEqual(me);
    expect(tokenOf(0)).toBe('Bearer first');
  });

  it('tries once more with a new token after a 401', async () => {
    answers = [() => problem(401), () => json({ accessToken: 'second', expiresIn: 900, user }), () => json(me)];
    expect(await call('me')).toEqual(me);
    expect(asked.mock.calls.map(([address]) => address)).toEqual(['/api/me', '/api/auth/refresh', '/api/me']);
    expect(tokenOf(2)).toBe('Bearer second');
  });

  it('does not try a third time', async () => {
    answers = [() => problem(401), () => json({ accessToken: 'second', expiresIn: 900, user }), () => problem(401)];
    await expect(call('me')).rejects.toMatchObject({ problem: { kind: 'signed-out' } });
    expect(asked).toHaveBeenCalledTimes(3);
  });

  it('signs out when the refresh is refused too', async () => {
    answers = [() => problem(401), () => problem(401)];
    await expect(call('me')).rejects.toBeInstanceOf(ApiError);
    expect(session.get().status).toBe('signed-out');
  });

  it('asks no token for what anyone may call', async () => {
    answers = [() => json({ open: false, demo: true })];
    await call('welcomeState');
    expect(tokenOf(0)).toBeNull();
  });

  it('tells a lost network from a refusal, and remembers it', async () => {
    answers = [
      () => {
        throw new TypeError('Failed to fetch');
      },
    ];
    await expect(call('me')).rejects.toMatchObject({ problem: { kind: 'unreachable' } });
    expect(connection.get().reachable).toBe(false);
    answers = [() => json(me)];
    await call('me');
    expect(connection.get().reachable).toBe(true);
  });

  it('passes an abort through', async () => {
    const abort = new AbortController();
    answers = [
      () => {
        abort.abort();
        throw new DOMException('aborted', 'AbortError');
      },
    ];
    await expect(call('me', { signal: abort.signal })).rejects.toThrow('aborted');
  });

  it('refuses an answer that does not fit the contract', async () => {
    answers = [() => json({ id: 1 })];
    await expect(call('me')).rejects.toMatchObject({ problem: { kind: 'unexpected' } });
  });
});

describe('a problem', () => {
  it.each([
    [401, 'signed-out'],
    [403, 'forbidden'],
    [404, 'not-found'],
    [409, 'conflict'],
    [422, 'bad-input'],
    [400, 'bad-input'],
    [429, 'too-many'],
    [500, 'server'],
    [503, 'server'],
  ])('of status %d is %s', (status, kind) => {
    expect(problemOf(status, null).kind).toBe(kind);
  });

  it.each([401, 403, 404, 409, 422, 429, 500])('of status %d says what to do even without a detail', (status) => {
    expect(problemSentence(problemOf(status, 'gateway page')).length).toBeGreaterThan(10);
  });

  it("keeps the server's own sentence and fields", () => {
    const body = { type: 'x', title: 'Bad', status: 422, detail: 'Look below.', errors: [{ path: 'email', message: 'Give one' }] };
    expect(problemOf(422, body)).toEqual({ kind: 'bad-input', detail: 'Look below.', errors: [{ path: 'email', message: 'Give one' }] });
  });

  it('is unexpected for anything that did not come from the API', () => {
    expect(problemFrom(new Error('boom'))).toEqual({ kind: 'unexpected', detail: 'boom' });
  });
});
