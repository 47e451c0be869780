// @vitest-environment jsdom
import { afterEach, describe, expect, it, vi } from 'vitest';
import { ApiError } from '../../lib/api-problem.ts';
import { createSession } from '../../lib/session.ts';

const user = { id: '0190a000-0000-7000-8000-000000001000', email: 'owner@ternlane.example', name: 'Owner' };
const grant = (accessToken: string) => ({ accessToken, expiresIn: 900, user });

function open(askRefresh: () => Promise<ReturnType<typeof grant>>) {
  let nowMs = 1_000_000;
  const session = createSession({ askRefresh, nowMs: () => nowMs });
  return { session, advance: (byMs: number) => (nowMs += byMs) };
}

afterEach(() => vi.unstubAllGlobals());

describe('the session', () => {
  it('shares one refresh among all who ask at the same time', async () => {
    const ask = vi.fn(() => Promise.resolve(grant('one')));
    const { session } = open(ask);
    const tokens = await Promise.all([session.accessToken(), session.accessToken(), session.refresh()]);
    expect(tokens).toEqual(['one', 'one', 'one']);
    expect(ask).toHaveBeenCalledTimes(1);
    expect(session.get()).toEqual({ status: 'signed-in', user });
  });

  it('asks again only when the token is about to end', async () => {
    const ask = vi.fn().mockResolvedValueOnce(grant('one')).mockResolvedValueOnce(grant('two'));
    const { session, advance } = open(ask);
    await session.accessToken();
    advance(800_000);
    expect(await session.accessToken()).toBe('one');
    advance(80_000);
    expect(await session.accessToken()).toBe('two');
  });

  it('refreshes under a lock that the other tabs share', async () => {
    const names: string[] = [];
    const locks = {
      request: (name: string, work: () => Promise<unknown>) => {
        names.push(name);
        return work();
      },
    };
    vi.stubGlobal('navigator', { locks });
    const { session } = open(() => Promise.resolve(grant('one')));
    await session.refresh();
    expect(names).toEqual(['steadfall-refresh']);
  });

  it('is signed out when the server does not take the cookie', async () => {
    const { session } = open(() => Promise.reject(new ApiError({ kind: 'signed-out', detail: '' })));
    expect(await session.refresh()).toBeNull();
    expect(session.get()).toEqual({ status: 'signed-out' });
  });

  it('asks nothing more once it is signed out', async () => {
    const ask = vi.fn(() => Promise.resolve(grant('one')));
    const { session } = open(ask);
    session.forget();
    expect(await session.accessToken()).toBeNull();
    expect(ask).not.toHaveBeenCalled();
  });

  it('signs nobody out for a lost network', async () => {
    const ask = vi
      .fn()
      .mockResolvedValueOnce(grant('one'))
      .mockRejectedValueOnce(new ApiError({ kind: 'unreachable' }));
    const { session, advance } = open(ask);
    await session.refresh();
    advance(900_000);
    await expect(session.accessToken()).rejects.toThrow('No connection');
    expect(session.get().status).toBe('signed-in');
  });

  it('says that the server is unreachable when nothing was known yet', async () => {
    const { session } = open(() => Promise.reject(new ApiError({ kind: 'unreachable' })));
    await expect(session.refresh()).rejects.toBeInstanceOf(ApiError);
    expect(session.get().status).toBe('unreachable');
  });

  it('tells its listeners only of what changed', async () => {
    const { session } = open(() => Promise.resolve(grant('one')));
    const heard = vi.fn();
    const stop = session.subscribe(heard);
    await session.refresh();
    await session.refresh();
    session.forget();
    session.forget();
    expect(heard).toHaveBeenCalledTimes(2);
    stop();
    session.accept(grant('two'));
    expect(heard).toHaveBeenCalledTimes(2);
  });
});
