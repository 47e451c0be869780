import jwt from 'jsonwebtoken';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { manualClock, type ManualClock } from '../../helpers/core.ts';
import { type CookieJar, cookieJar } from '../../helpers/cookie-jar.ts';
import { startTestServer, type TestServer } from '../../helpers/server.ts';

const email = 'first@reef.example';
const password = 'long enough to type';

let clock: ManualClock;
let server: TestServer;
let jar: CookieJar;

async function makeFirstAccount() {
  const code = server.context.welcomeCode;
  if (code === null) throw new Error('No welcome code was made');
  const body = { code, email, name: 'First', password, siteName: 'Harbour room', timeZone: 'Europe/Lisbon' };
  return jar.post('/api/auth/welcome', body);
}

beforeEach(async () => {
  clock = manualClock();
  server = await startTestServer({ clock });
  jar = cookieJar(server.url);
});

afterEach(() => server.close());

describe('the first account', () => {
  it('owns the first site and is signed in', async () => {
    const response = await makeFirstAccount();
    expect(response.status).toBe(201);
    const grant = (await response.json()) as { accessToken: string };
    const me = await server.api(grant.accessToken)('me');
    expect(me).toMatchObject({ email, memberships: [{ siteName: 'Harbour room', role: 'owner' }] });
    expect(await server.api()('welcomeState')).toEqual({ open: false, demo: false });
  });

  it('is refused with a wrong code, and nothing is stored', async () => {
    const response = await jar.post('/api/auth/welcome', {
      code: 'AAAA-BBBB-CCCC',
      email,
      name: 'First',
      password,
      siteName: 'Harbour room',
      timeZone: 'Europe/Lisbon',
    });
    expect(response.status).toBe(422);
    expect(await response.json()).toMatchObject({ errors: [{ path: 'code' }] });
    expect(await server.api()('welcomeState')).toEqual({ open: true, demo: false });
  });

  it('can be made once, also when two people try at the same time', async () => {
    const statuses = (await Promise.all([makeFirstAccount(), makeFirstAccount()])).map((response) => response.status);
    expect(statuses.sort()).toEqual([201, 409]);
  });
});

describe('signing in', () => {
  beforeEach(async () => {
    await makeFirstAccount();
    jar.clear();
  });

  it('answers with a token and a cookie that scripts cannot read', async () => {
    const response = await jar.post('/api/auth/sign-in', { email: email.toUpperCase(), password });
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({ expiresIn: 600, user: { email } });
    const cookie = response.headers.get('set-cookie') ?? '';
    expect(cookie).toMatch(/HttpOnly/i);
    expect(cookie).toMatch(/SameSite=Strict/i);
    expect(cookie).toMatch(/Path=\/api\/auth/i);
    expect(cookie).not.toMatch(/Secure/i);
  });

  it('refuses a wrong password and an unknown address in the same words', async () => {
    const wrong = await server.api().problem('signIn', { body: { email, password: 'not the password' } });
    const unknown = await server.api().problem('signIn', { body: { email: 'nobody@reef.example', password: 'not the password' } });
    expect(wrong).toMatchObject({ status: 401 });
    expect(unknown).toEqual(wrong);
  });

  it('is limited per account before anything is hashed, and open again after a while', async () => {
    const attempt = (secret: string) => server.api().raw('signIn', { body: { email, password: secret } });
    for (let n = 0; n < 10; n += 1) expect((await attempt('not the password')).status).toBe(401);
    const refused = await attempt(password);
    expect(refused.status).toBe(429);
    expect(Number(refused.headers.get('retry-after'))).toBeGreaterThan(0);
    clock.advance(15 * 60_000 + 1);
    expect((await attempt(password)).status).toBe(200);
  });

  it('is limited per address over all accounts', async () => {
    const attempt = (n: number) => server.api().raw('signIn', { body: { email: `nobody-${n}@reef.example`, password: 'x' } });
    const statuses: number[] = [];
    for (let n = 0; n < 31; n += 1) statuses.push((await attempt(n)).status);
    expect(statuses.slice(0, 30).every((status) => status === 401)).toBe(true);
    expect(statuses[30]).toBe(429);
  });

  it('says what is missing', async () => {
    const problem = await server.api().problem('signIn', { body: { email: 'no address' } });
    expect(problem.status).toBe(422);
    expect(problem.errors?.map((error) => error.path)).toEqual(['email', 'password']);
  });
});

describe('the access token', () => {
  it('is refused once it has expired', async () => {
    const person = await server.person();
    expect((await person.api.raw('me')).status).toBe(200);
    clock.advance(601_000);
    expect((await person.api.raw('me')).status).toBe(401);
  });

  it('is refused when it is signed by nobody, by another key, or made for something else', async () => {
    const { id, sessionId } = await server.person();
    const nowSeconds = Math.floor(clock.nowMs() / 1000);
    const payload = { sub: id, sid: sessionId, iat: nowSeconds, exp: nowSeconds + 600, iss: 'steadfall', aud: 'steadfall-api' };
    const secret = server.core.config.JWT_SECRET ?? '';
    const typed = (alg: 'HS256' | 'HS512', typ: string) => ({ algorithm: alg, header: { alg, typ } });
    const good = jwt.sign(payload, secret, typed('HS256', 'at+jwt'));
    const bad = [
      jwt.sign(payload, null, { algorithm: 'none', header: { alg: 'none', typ: 'at+jwt' } }),
      jwt.sign(payload, 'another key that is long enough to be one', typed('HS256', 'at+jwt')),
      jwt.sign(payload, secret, typed('HS512', 'at+jwt')),
      jwt.sign(payload, secret, typed('HS256', 'JWT')),
      jwt.sign({ ...payload, aud: 'another service' }, secret, typed('HS256', 'at+jwt')),
      jwt.sign({ ...payload, iss: 'somebody else' }, secret, typed('HS256', 'at+jwt')),
      `${good.slice(0, -2)}${good.endsWith('AA') ? 'BB' : 'AA'}`,
      'not a token',
    ];
    expect((await server.api(good).raw('me')).status).toBe(200);
    for (const token of bad) expect((await server.api(token).raw('me')).status).toBe(401);
  });
});
