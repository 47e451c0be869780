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

describe.each(['createSystem', 'updateSystem', 'createHead', 'updateHead', 'putRule', 'putSchedule'] as const)('the body of %s', (name) => {
  it('is refused whole with a field that nobody knows, since a misspelt limit would be none', async () => {
    const input = (await goodInputs(server, world)[name](world.owner)) as { params: Record<string, string>; body: object };
    const response = await server.api(world.owner.token).raw(name, { ...input, body: { ...input.body, hardLimit: 1 } });
    expect(response.status).toBe(422);
    expect(await response.text()).toContain('hardLimit');
    const good = await server.api(world.owner.token).raw(name, input);
    expect(good.status).not.toBe(422);
  });
});
