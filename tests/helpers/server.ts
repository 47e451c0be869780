import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import pino from 'pino';
import { uuidv7 } from 'uuidv7';
import type { AnswerOf, BodyInputOf, QueryInputOf } from '#shared/contract/endpoint.ts';
import { type EndpointName, endpoints } from '#shared/contract/endpoints.ts';
import type { Problem } from '#shared/contract/problem.ts';
import type { Role } from '#shared/domain/role.ts';
import { createAccessTokens } from '../../server/auth/access-token.ts';
import { addUser } from '../../server/auth/users.ts';
import { type Clock, systemClock } from '../../server/clock.ts';
import { readConfig } from '../../server/config.ts';
import { query } from '../../server/db/open.ts';
import type { Transaction } from '../../server/db/writer.ts';
import { addSite } from '../../server/sites/add-site.ts';
import { type RunningServer, startServer, type StartOptions } from '../../server/start-server.ts';

type Table = typeof endpoints;

export interface CallInput<Name extends EndpointName> {
  /** Path parameters by name. */
  params?: Record<string, string>;
  query?: QueryInputOf<Table[Name]>;
  body?: BodyInputOf<Table[Name]>;
}

/** Input that the types do not check: wrong on purpose, or made for any endpoint. */
export interface AnyInput {
  params?: Record<string, string>;
  query?: Record<string, string>;
  body?: unknown;
  /** Sent as multipart in place of a body. */
  form?: FormData;
}

export interface Api {
  /** Calls an endpoint that must succeed. @throws {Error} with the problem when it does not. */
  <Name extends EndpointName>(name: Name, input?: CallInput<Name>): Promise<AnswerOf<Table[Name]>>;
  /** Calls an endpoint with whatever input, and gives the raw response. */
  raw(name: EndpointName, input?: AnyInput): Promise<Response>;
  /** Calls an endpoint that must be refused. */
  problem(name: EndpointName, input?: AnyInput): Promise<Problem>;
}

export interface TestPerson {
  id: string;
  email: string;
  sessionId: string;
  token: string;
  api: Api;
}

export interface TestServer extends RunningServer {
  folder: string;
  /** Typed by the endpoint table; without a token nobody is signed in. */
  api(token?: string): Api;
  /** Makes an account with an open session, without the cost of hashing a password: such a person cannot sign in. */
  person(name?: string): Promise<TestPerson>;
  /** Opens a second session for a person and gives its id. */
  anotherSession(person: TestPerson): Promise<string>;
  site(owner: TestPerson, name?: string): Promise<string>;
  join(person: TestPerson, siteId: string, role: Role): Promise<void>;
  /** A new person with this role in the site. */
  member(siteId: string, role: Role): Promise<TestPerson>;
  /** A person who owns a new site with one system in it. */
  household(name?: string): Promise<Household>;
}

export interface Household {
  owner: TestPerson;
  siteId: string;
  systemId: string;
}

export interface TestServerOptions extends StartOptions {
  environment?: Record<string, string>;
  /** Kept after `close()` when given, so that a second server can start on it. */
  folder?: string;
}

const jwtSecret = 'a secret that only tests know, long enough';

function addressOf(url: string, name: EndpointName, input: AnyInput): string {
  const described = endpoints[name];
  const filled = described.path.replace(/:([A-Za-z]+)/g, (_, parameter: string) =>
    encodeURIComponent(input.params?.[parameter] ?? `no-${parameter}`),
  );
  const search = new URLSearchParams(input.query ?? {}).toString();
  return `${url}/api${filled}${search === '' ? '' : `?${search}`}`;
}

export function apiOf(url: string, token?: string): Api {
  function raw(name: EndpointName, input: AnyInput = {}): Promise<Response> {
    return fetch(addressOf(url, name, input), {
      method: endpoints[name].method.toUpperCase(),
      headers: {
        ...(token === undefined ? {} : { authorization: `Bearer ${token}` }),
        ...(input.body === undefined ? {} : { 'content-type': 'application/json' }),
      },
      ...(input.body === undefined ? {} : { body: JSON.stringify(input.body) }),
      ...(input.form === undefined ? {} : { body: input.form }),
    });
  }

  async function call<Name extends EndpointName>(name: Name, input: CallInput<Name> = {}): Promise<AnswerOf<Table[Name]>> {
    const entries = Object.entries(input.query ?? {}).map(([key, value]) => [key, String(value)]);
    const response = await raw(name, { ...input, query: Object.fromEntries(entries) as Record<string, string> });
    const text = await response.text();
    if (!response.ok) throw new Error(`${name} answered ${response.status}: ${text}`);
    return endpoints[name].answer.parse(JSON.parse(text)) as AnswerOf<Table[Name]>;
  }

  async function problem(name: EndpointName, input?: AnyInput): Promise<Problem> {
    const response = await raw(name, input);
    if (response.ok) throw new Error(`${name} was not refused: ${response.status} ${await response.text()}`);
    return (await response.json()) as Problem;
  }

  return Object.assign(call, { raw, problem });
}

/** The whole server in this process, on free ports, in a temporary folder that `close()` removes. */
export async function startTestServer(options: TestServerOptions = {}): Promise<TestServer> {
  const { environment = {}, folder: given, ...rest } = options;
  const clock: Clock = options.clock ?? systemClock;
  const folder = given ?? mkdtempSync(path.join(tmpdir(), 'steadfall-test-'));
  const config = readConfig({ DATA_DIR: folder, DEMO: '0', PORT: '0', MQTT_PORT: '0', JWT_SECRET: jwtSecret, ...environment });
  const running = await startServer(config, { log: pino({ level: 'silent' }), checkAnswers: true, ...rest, clock });
  const { core, url } = running;
  const tokens = createAccessTokens(config.JWT_SECRET ?? jwtSecret, clock);

  function insertSession(tx: Transaction, userId: string): string {
    const nowMs = clock.nowMs();
    const session = { id: uuidv7(), userId, generation: 0, rotatedAtMs: nowMs, createdAtMs: nowMs };
    tx.run(query.insertInto('session').values({ ...session, expiresAtMs: nowMs + 30 * 86_400_000, revokedAtMs: null, userAgent: 'test' }));
    return session.id;
  }

  async function person(name = 'Somebody'): Promise<TestPerson> {
    const { user, sessionId } = await core.writer.commit((tx) => {
      const added = addUser(tx, { email: `${uuidv7()}@test.example`, name, passwordHash: 'no password', nowMs: clock.nowMs() });
      return { user: added, sessionId: insertSession(tx, added.id) };
    });
    const token = tokens.sign({ userId: user.id, sessionId });
    return { id: user.id, email: user.email, sessionId, token, api: apiOf(url, token) };
  }

  async function join(member: TestPerson, siteId: string, role: Role): Promise<void> {
    const row = { siteId, userId: member.id, role, createdAtMs: clock.nowMs() };
    await core.writer.commit((tx) => tx.run(query.insertInto('membership').values(row)));
  }

  async function site(owner: TestPerson, name = 'Harbour room'): Promise<string> {
    const id = uuidv7();
    await core.writer.commit((tx) => addSite(tx, { id, name, timeZone: 'Europe/Lisbon', ownerId: owner.id, nowMs: clock.nowMs() }));
    return id;
  }

  return {
    ...running,
    folder,
    api: (token) => apiOf(url, token),
    person,
    anotherSession: (somebody) => core.writer.commit((tx) => insertSession(tx, somebody.id)),
    site,
    join,
    async member(siteId, role) {
      const member = await person(role);
      await join(member, siteId, role);
      return member;
    },
    async household(name = 'Harbour room') {
      const owner = await person('owner');
      const siteId = await site(owner, name);
      const body = { name: 'Front window', displayLitres: 400, sumpLitres: 80, displacementLitres: 60 };
      const system = await owner.api('createSystem', { params: { siteId }, body });
      return { owner, siteId, systemId: system.id };
    },
    async close() {
      await running.close();
      if (given === undefined) rmSync(folder, { recursive: true, force: true });
    },
  };
}
