import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestServer, type TestServer } from '../../helpers/server.ts';
import { goodInputs, makeWorld, type World } from './authorisation-inputs.ts';

let server: TestServer;
let world: World;

beforeAll(async () => {
  server = await startTestServer();
  world = await makeWorld(server);
});

afterAll(() => server.close());

const shortLists = [
  'listSystems',
  'listSites',
  'listMembers',
  'listProducts',
  'listDevices',
  'listMessages',
  'listHeads',
  'listReservoirs',
  'listSeries',
  'listOrders',
  'listRules',
  'sessions',
] as const;

describe.each(shortLists)('%s', (name) => {
  const ask = async (query: Record<string, string>) => {
    const input = await goodInputs(server, world)[name](world.owner);
    const response = await server.api(world.owner.token).raw(name, { ...input, query });
    return { status: response.status, body: (await response.json()) as { items: unknown[]; next: string | null } };
  };

  it('holds to the limit of a page, and refuses a cursor that it did not give', async () => {
    const [most, above, none, foreign] = [
      await ask({ limit: '500' }),
      await ask({ limit: '501' }),
      await ask({ limit: '0' }),
      await ask({ cursor: 'x' }),
    ];
    expect([most.status, above.status, none.status, foreign.status]).toEqual([200, 422, 422, 422]);
  });

  it('comes whole without a limit, and in pages with one', async () => {
    const { items: whole, next } = (await ask({})).body;
    expect(next).toBeNull();
    const seen: unknown[] = [];
    let cursor: string | null = null;
    do {
      const { body } = await ask(cursor === null ? { limit: '1' } : { limit: '1', cursor });
      expect(body.items.length).toBeLessThanOrEqual(1);
      seen.push(...body.items);
      cursor = body.next;
    } while (cursor !== null);
    expect(seen).toHaveLength(whole.length);
  });
});
