import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { manualClock, type ManualClock } from '../../helpers/core.ts';
import { type CookieJar, cookieJar } from '../../helpers/cookie-jar.ts';
import { startTestServer, type TestServer } from '../../helpers/server.ts';

const credentials = { email: 'first@reef.example', password: 'long enough to type' };

let clock: ManualClock;
let server: TestServer;
let jar: CookieJar;
let token: string;

async function tokenOf(response: Response): Promise<string> {
  expect(response.status).toBe(200);
  return ((await response.json()) as { accessToken: string }).accessToken;
}

const signIn = async (browser: CookieJar) => tokenOf(await browser.post('/api/auth/sign-in', credentials));
const refresh = (browser: CookieJar, headers?: Record<string, string>) => browser.post('/api/auth/refresh', undefined, headers);
const meStatus = async (accessToken: string) => (await server.api(accessToken).raw('me')).status;

beforeEach(async () => {
  clock = manualClock();
  server = await startTestServer({ clock });
  jar = cookieJar(server.url);
  const body = { code: server.context.welcomeCode, ...credentials, name: 'First', siteName: 'Harbour room', timeZone: 'UTC' };
  await jar.post('/api/auth/welcome', body);
  token = await signIn(jar);
});

afterEach(() => server.close());

describe('refreshing', () => {
  it('rotates the cookie at each use, and goes on for as long as it is used', async () => {
    for (let day = 0; day < 60; day += 20) {
      const before = jar.read();
      clock.advance(20 * 86_400_000);
      token = await tokenOf(await refresh(jar));
      expect(jar.read()).not.toBe(before);
      expect(await meStatus(token)).toBe(200);
    }
  });

  it('serves two tabs that present the same cookie within ten seconds, with the same successor', async () => {
    const secondTab = cookieJar(server.url);
    secondTab.write(jar.read());
    await tokenOf(await refresh(jar));
    clock.advance(9_000);
    await tokenOf(await refresh(secondTab));
    expect(secondTab.read()).toBe(jar.read());
    await tokenOf(await refresh(jar));
  });

  it('ends the session when an old cookie comes back later, however often it was rotated since', async () => {
    const thief = cookieJar(server.url);
    thief.write(jar.read());
    for (let n = 0; n < 3; n += 1) {
      token = await tokenOf(await refresh(jar));
      clock.advance(60_000);
    }
    expect((await refresh(thief)).status).toBe(401);
    expect((await refresh(jar)).status).toBe(401);
    expect(await meStatus(token)).toBe(401);
  });

  it('ends the session of a thief who was first, too', async () => {
    const thief = cookieJar(server.url);
    thief.write(jar.read());
    await tokenOf(await refresh(thief));
    const stolen = await tokenOf(await refresh(thief));
    clock.advance(11_000);
    expect((await refresh(jar)).status).toBe(401);
    expect(await meStatus(stolen)).toBe(401);
  });

  it('refuses a cookie that was made up, and leaves the session alone', async () => {
    const forger = cookieJar(server.url);
    const [name = '', value = ''] = jar.read().split('=');
    const [sessionId] = value.split('.');
    forger.write(`${name}=${sessionId}.0.${'A'.repeat(43)}`);
    expect((await refresh(forger)).status).toBe(401);
    expect(await meStatus(token)).toBe(200);
  });

  it('ends a session that was not used for a month', async () => {
    clock.advance(30 * 86_400_000 + 1);
    expect((await refresh(jar)).status).toBe(401);
  });

  it('is refused to pages of other sites, and answered to the app itself', async () => {
    expect((await refresh(jar, { 'sec-fetch-site': 'cross-site' })).status).toBe(403);
    expect((await refresh(jar, { 'sec-fetch-site': 'same-site' })).status).toBe(403);
    expect((await refresh(jar, { origin: 'https://elsewhere.example' })).status).toBe(403);
    expect((await jar.post('/api/auth/sign-out', undefined, { origin: 'https://elsewhere.example' })).status).toBe(403);
    expect((await refresh(jar, { origin: server.url })).status).toBe(200);
    expect((await refresh(jar, { 'sec-fetch-site': 'same-origin' })).status).toBe(200);
  });
});

describe('signing out', () => {
  it('ends the session at once and takes the cookie away', async () => {
    expect((await jar.post('/api/auth/sign-out')).status).toBe(200);
    expect(jar.read()).toBe('');
    expect(await meStatus(token)).toBe(401);
  });

  it('works by access token for a client without cookies', async () => {
    await server.api(token)('signOut');
    expect(await meStatus(token)).toBe(401);
  });
});

describe("one's sessions", () => {
  it('are listed with the current one marked, and can be ended from another', async () => {
    const other = await signIn(cookieJar(server.url));
    const { items } = await server.api(other)('sessions');
    expect(items).toHaveLength(3);
    expect(items.filter((session) => session.current)).toHaveLength(1);
    for (const session of items.filter((candidate) => !candidate.current)) {
      await server.api(other)('endSession', { params: { sessionId: session.id } });
    }
    expect(await meStatus(token)).toBe(401);
    expect(await meStatus(other)).toBe(200);
  });

  it('of somebody else are not there', async () => {
    const stranger = await server.person();
    const [own] = (await server.api(token)('sessions')).items;
    const problem = await stranger.api.problem('endSession', { params: { sessionId: own?.id ?? '' } });
    expect(problem.status).toBe(404);
    expect(await meStatus(token)).toBe(200);
  });

  it('all but the current one end when the password changes', async () => {
    const other = await signIn(cookieJar(server.url));
    const next = 'another one that is long';
    const wrong = await server.api(token).problem('changePassword', { body: { current: 'not it', next } });
    expect(wrong).toMatchObject({ status: 422, errors: [{ path: 'current' }] });
    await server.api(token)('changePassword', { body: { current: credentials.password, next } });
    expect(await meStatus(token)).toBe(200);
    expect(await meStatus(other)).toBe(401);
    expect((await server.api().raw('signIn', { body: credentials })).status).toBe(401);
    expect((await server.api().raw('signIn', { body: { ...credentials, password: next } })).status).toBe(200);
  });
});
