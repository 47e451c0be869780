import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Endpoint } from '#shared/contract/endpoint.ts';
import { type EndpointName, endpoints } from '#shared/contract/endpoints.ts';
import { isAtLeast, roles } from '#shared/domain/role.ts';
import { startTestServer, type TestPerson, type TestServer } from '../../helpers/server.ts';
import { goodInputs, makeWorld, type World } from './authorisation-inputs.ts';

const callers = [...roles, 'owner of another site', 'signed out'] as const;
type Caller = (typeof callers)[number];

let server: TestServer;
let world: World;
let otherSiteId: string;

beforeAll(async () => {
  server = await startTestServer();
  world = await makeWorld(server);
  otherSiteId = await server.site(await server.person(), 'Long pier');
});

afterAll(() => server.close());

/** What the contract says; null: it is not refused for who calls. */
function refusalOf({ who }: Endpoint, caller: Caller): 401 | 403 | 404 | null {
  if (who === 'anyone') return null;
  if (caller === 'signed out') return 401;
  if (who === 'signed-in') return null;
  if (caller === 'owner of another site') return 404;
  return isAtLeast(caller, who) ? null : 403;
}

/** Somebody new each time, since some requests end the session or change the member. */
function personAs(caller: Caller): Promise<TestPerson> {
  if (caller === 'signed out') return server.person();
  return caller === 'owner of another site' ? server.member(otherSiteId, 'owner') : server.member(world.siteId, caller);
}

async function statusOf(name: EndpointName, caller: Caller): Promise<number> {
  const person = await personAs(caller);
  const input = await goodInputs(server, world)[name](person);
  return (await server.api(caller === 'signed out' ? undefined : person.token).raw(name, input)).status;
}

/** A good answer, a rule of the product, or input that is empty on purpose: it came as far as the handler. */
const isPast = (status: number) => [200, 201, 409, 422].includes(status);

describe.each(Object.keys(endpoints) as EndpointName[])('%s', (name) => {
  it.each([...callers])('is answered or refused as the contract says: %s', async (caller) => {
    const status = await statusOf(name, caller);
    const refusal = refusalOf(endpoints[name], caller);
    // Without its cookie a refresh is refused to everybody; the live ticket names its systems in the body.
    if (name === 'refresh') expect(status).toBe(401);
    else if (name === 'createLiveTicket' && caller === 'owner of another site') expect(status).toBe(404);
    else if (refusal !== null) expect(status).toBe(refusal);
    else expect(status).toSatisfy(isPast);
  });
});

describe('an id', () => {
  const named = (Object.keys(endpoints) as EndpointName[]).filter((name) => !['anyone', 'signed-in'].includes(endpoints[name].who));

  it.each(named)('that is made up, or no id at all, is not found: %s', async (name) => {
    const parameter = /:([A-Za-z]+)/.exec(endpoints[name].path)?.[1] ?? '';
    for (const id of ['0190a000-0000-7000-8000-000000000000', 'x', "' or 1=1 --", '%00']) {
      const { owner } = world;
      expect(await owner.api.problem(name, { params: { [parameter]: id } })).toMatchObject({ status: 404 });
    }
  });
});
