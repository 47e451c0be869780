import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { startTestServer, type TestPerson, type TestServer } from '../../helpers/server.ts';

let server: TestServer;

beforeAll(async () => {
  server = await startTestServer();
});

afterAll(() => server.close());

async function invitedToken(owner: TestPerson, siteId: string, email: string): Promise<string> {
  const { items } = await owner.api('listOutbox', { params: { siteId } });
  const mail = items.find((candidate) => candidate.to === email);
  const token = /\/join\?token=([\w-]+)/.exec(mail?.body ?? '')?.[1];
  if (token === undefined) throw new Error(`No invitation to ${email} was written`);
  return token;
}

describe('making a site', () => {
  it('makes its maker the owner', async () => {
    const person = await server.person();
    const site = await person.api('createSite', { body: { name: '  Long pier ', timeZone: 'Europe/Lisbon' } });
    expect(site).toMatchObject({ name: 'Long pier', role: 'owner' });
    expect((await person.api('listSites')).items).toEqual([site]);
  });

  it('answers the same id and body again with the first result', async () => {
    const person = await server.person();
    const body = { id: uuidv7(), name: 'Long pier', timeZone: 'UTC' };
    expect((await person.api.raw('createSite', { body })).status).toBe(201);
    const repeated = await person.api.raw('createSite', { body });
    expect(repeated.status).toBe(200);
    expect(await repeated.json()).toMatchObject({ id: body.id });
    expect(await person.api.problem('createSite', { body: { ...body, name: 'Short pier' } })).toMatchObject({
      status: 409,
      rule: 'id-taken',
    });
  });

  it("refuses a second owner's client-made id without telling whose it is", async () => {
    const [first, second] = [await server.person(), await server.person()];
    const body = { id: uuidv7(), name: 'Long pier', timeZone: 'UTC' };
    await first.api('createSite', { body });
    expect(await second.api.problem('createSite', { body })).toMatchObject({ status: 409 });
    expect((await second.api('listSites')).items).toEqual([]);
    expect((await first.api('listSites')).items).toHaveLength(1);
  });

  it('refuses a zone that does not exist and a name that is too long', async () => {
    const person = await server.person();
    const problem = await person.api.problem('createSite', { body: { name: 'x'.repeat(81), timeZone: 'Europe/Atlantis' } });
    expect(problem).toMatchObject({ status: 422, errors: [{ path: 'name' }, { path: 'timeZone' }] });
    expect((await person.api('listSites')).items).toEqual([]);
  });
});

describe('inviting', () => {
  it('lets somebody new join once, with the role that the owner chose', async () => {
    const { owner, siteId } = await server.household();
    const email = 'new-sitter@reef.example';
    await owner.api('invite', { params: { siteId }, body: { email, role: 'sitter' } });
    const token = await invitedToken(owner, siteId, email);
    const body = { token, name: 'New sitter', password: 'long enough to type' };
    const grant = await server.api()('acceptInvite', { body });
    const me = await server.api(grant.accessToken)('me');
    expect(me).toMatchObject({ email, memberships: [{ siteId, role: 'sitter' }] });
    expect(await server.api().problem('acceptInvite', { body })).toMatchObject({ status: 404 });
  });

  it('asks somebody who has an account for its password', async () => {
    const first = await server.household();
    const second = await server.household('Long pier');
    const email = 'twice@reef.example';
    await first.owner.api('invite', { params: { siteId: first.siteId }, body: { email, role: 'keeper' } });
    await second.owner.api('invite', { params: { siteId: second.siteId }, body: { email, role: 'viewer' } });
    const password = 'long enough to type';
    await server.api()('acceptInvite', { body: { token: await invitedToken(first.owner, first.siteId, email), name: 'Twice', password } });
    const token = await invitedToken(second.owner, second.siteId, email);
    const problem = await server.api().problem('acceptInvite', { body: { token, name: 'Twice', password: 'somebody else guessing' } });
    expect(problem.status).toBe(401);
    const grant = await server.api()('acceptInvite', { body: { token, name: 'Twice', password } });
    expect((await server.api(grant.accessToken)('me')).memberships).toHaveLength(2);
  });

  it('refuses a short password for a new account, and the link stays good', async () => {
    const { owner, siteId } = await server.household();
    const email = 'short@reef.example';
    await owner.api('invite', { params: { siteId }, body: { email, role: 'viewer' } });
    const token = await invitedToken(owner, siteId, email);
    const problem = await server.api().problem('acceptInvite', { body: { token, name: 'Short', password: 'short' } });
    expect(problem).toMatchObject({ status: 422, errors: [{ path: 'password' }] });
    await server.api()('acceptInvite', { body: { token, name: 'Short', password: 'long enough to type' } });
  });

  it('sends one mail for the same id and body sent twice', async () => {
    const { owner, siteId } = await server.household();
    const body = { id: uuidv7(), email: 'once@reef.example', role: 'viewer' as const };
    expect((await owner.api.raw('invite', { params: { siteId }, body })).status).toBe(201);
    expect((await owner.api.raw('invite', { params: { siteId }, body })).status).toBe(200);
    expect((await owner.api('listOutbox', { params: { siteId } })).items).toHaveLength(1);
  });

  it('keeps line breaks of a name out of the headers of a mail', async () => {
    const owner = await server.person();
    const siteId = await server.site(owner, 'Pier\r\nBcc: everybody@elsewhere.example');
    await owner.api('invite', { params: { siteId }, body: { email: 'plain@reef.example', role: 'viewer' } });
    const [mail] = (await owner.api('listOutbox', { params: { siteId } })).items;
    expect(mail?.subject).toBe('You are invited to Pier Bcc: everybody@elsewhere.example on Steadfall');
  });
});

describe('members', () => {
  it('are listed without addresses to viewers, and with them to the others', async () => {
    const { owner, siteId } = await server.household();
    const viewer = await server.member(siteId, 'viewer');
    const sitter = await server.member(siteId, 'sitter');
    const seenByViewer = (await viewer.api('listMembers', { params: { siteId } })).items;
    expect(seenByViewer.map((member) => member.email)).toEqual([null, null, null]);
    const seenBySitter = (await sitter.api('listMembers', { params: { siteId } })).items;
    expect(seenBySitter.find((member) => member.userId === owner.id)?.email).toBe(owner.email);
  });

  it('lose what their role allowed at once', async () => {
    const { owner, siteId, systemId } = await server.household();
    const keeper = await server.member(siteId, 'keeper');
    const body = { name: 'Renamed' };
    await keeper.api('updateSystem', { params: { systemId }, body });
    await owner.api('setRole', { params: { siteId, userId: keeper.id }, body: { role: 'viewer' } });
    expect(await keeper.api.problem('updateSystem', { params: { systemId }, body })).toMatchObject({ status: 403 });
    await owner.api('removeMember', { params: { siteId, userId: keeper.id } });
    expect(await keeper.api.problem('getSystem', { params: { systemId } })).toMatchObject({ status: 404 });
  });

  it('keep at least one owner, also when two owners leave at the same time', async () => {
    const { owner, siteId } = await server.household();
    const setRole = (userId: string) => owner.api.raw('setRole', { params: { siteId, userId }, body: { role: 'keeper' } });
    expect((await setRole(owner.id)).status).toBe(409);
    expect(await owner.api.problem('removeMember', { params: { siteId, userId: owner.id } })).toMatchObject({ rule: 'last-owner' });
    const second = await server.member(siteId, 'owner');
    const leave = (person: TestPerson) => person.api.raw('removeMember', { params: { siteId, userId: person.id } });
    const statuses = (await Promise.all([leave(owner), leave(second)])).map((response) => response.status);
    expect(statuses.sort()).toEqual([200, 409]);
  });

  it('of another site are not found through this one', async () => {
    const here = await server.household();
    const there = await server.household('Long pier');
    const params = { siteId: here.siteId, userId: there.owner.id };
    expect(await here.owner.api.problem('setRole', { params, body: { role: 'viewer' } })).toMatchObject({ status: 404 });
    expect((await there.owner.api('me')).memberships).toMatchObject([{ role: 'owner' }]);
  });
});

it('writes down who changed what, newest first, page by page', async () => {
  const { owner, siteId } = await server.household();
  const member = await server.member(siteId, 'viewer');
  for (const role of ['sitter', 'keeper', 'sitter'] as const)
    await owner.api('setRole', { params: { siteId, userId: member.id }, body: { role } });
  const first = await owner.api('listAudit', { params: { siteId }, query: { limit: 2 } });
  expect(first.items.map((entry) => entry.after)).toEqual([{ role: 'sitter' }, { role: 'keeper' }]);
  expect(first.items[0]).toMatchObject({ actorName: 'owner', before: { role: 'keeper' }, entityId: member.id });
  const rest = await owner.api('listAudit', { params: { siteId }, query: { cursor: first.next ?? '' } });
  expect(rest.items[0]).toMatchObject({ before: { role: 'viewer' }, after: { role: 'sitter' } });
  expect(rest.next).toBeNull();
});
