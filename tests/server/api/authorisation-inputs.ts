import { uuidv7 } from 'uuidv7';
import type { EndpointName } from '#shared/contract/endpoints.ts';
import { query } from '../../../server/db/open.ts';
import type { AnyInput, Household, TestPerson, TestServer } from '../../helpers/server.ts';

/** One thing of each kind in a site, for requests to name. */
export interface World extends Household {
  productId: string;
  deviceId: string;
  headId: string;
  reservoirId: string;
  seriesId: string;
}

export async function makeWorld(server: TestServer): Promise<World> {
  const house = await server.household();
  const { owner, siteId, systemId } = house;
  const product = await owner.api('createProduct', {
    params: { siteId },
    body: {
      name: 'Blend',
      form: 'liquid',
      composition: [{ substance: 'ethanol', percentByVolume: 40 }],
      label: { ml: 2, perLitres: 100, perDays: 1 },
    },
  });
  const { device } = await owner.api('createDevice', { params: { systemId }, body: { name: 'Pump', kind: 'pump' } });
  const reservoir = await owner.api('createReservoir', { params: { systemId }, body: { name: 'Bottle', capacityMl: 500 } });
  const use = { kind: 'carbon', productId: product.id, reservoirId: reservoir.id, mlPerSecond: 1, smallestMl: 0.1 } as const;
  const head = await owner.api('createHead', { params: { systemId }, body: { ...use, deviceId: device.id, head: 1 } });
  const seriesId = uuidv7();
  const series = { id: seriesId, siteId, systemId, deviceId: device.id, channel: 'ph', name: null, quantity: 'ph', unit: 'pH' };
  const never = { lastMs: null, lastValue: null, conflicts: 0, createdAtMs: server.core.clock.nowMs() };
  await server.core.writer.commit((tx) => tx.run(query.insertInto('series').values({ ...series, ...never })));
  return { ...house, productId: product.id, deviceId: device.id, headId: head.id, reservoirId: reservoir.id, seriesId };
}

async function makeAlarm(server: TestServer, { siteId, systemId }: World): Promise<string> {
  const id = uuidv7();
  const flags = { active: 1, acknowledged: 0, latched: 1, interlock: 1, shelvedUntilMs: null, returnedAtMs: null, closedAtMs: null };
  const figures = { value: 2, limitValue: 1, unit: 'mL', evidence: '{}', takenBy: null, arriveAtMs: null };
  const kind = { code: 'volume-hour', target: `test:${id}`, limitKind: 'hard', priority: 'urgent' } as const;
  const row = { id, siteId, systemId, ...kind, ...flags, ...figures, raisedAtMs: server.core.clock.nowMs(), tripKey: '', tripSeq: 0 };
  await server.core.writer.commit((tx) => tx.run(query.insertInto('alarm').values(row)));
  return id;
}

/** A good request to each endpoint, fresh each time, as `person` would send it. An endpoint without an entry does not compile. */
export function goodInputs(server: TestServer, world: World): Record<EndpointName, (person: TestPerson) => AnyInput | Promise<AnyInput>> {
  const { siteId, systemId, deviceId, headId, reservoirId, seriesId, productId } = world;
  const now = () => new Date(server.core.clock.nowMs()).toISOString();
  const hoursAhead = (hours: number) => new Date(server.core.clock.nowMs() + hours * 3_600_000).toISOString();
  const ofSite = { params: { siteId } };
  const ofSystem = { params: { systemId } };
  const range = { from: '0', to: '86400000' };
  const test = () => ({ at: now(), quantity: 'nitrate', value: 12, unit: 'mg/L NO3' });
  const alarm = async (body?: unknown): Promise<AnyInput> => ({ params: { alarmId: await makeAlarm(server, world) }, body });
  const memberOfSite = async () => ({ siteId, userId: (await server.member(siteId, 'viewer')).id });

  /** Written by whoever asks; whoever may not write gets one of the owner's. */
  async function testOf(person: TestPerson, body?: unknown): Promise<AnyInput> {
    const own = await person.api.raw('createTest', { ...ofSystem, body: test() });
    const made = own.ok
      ? ((await own.json()) as { id: string })
      : await world.owner.api('createTest', { ...ofSystem, body: { at: now(), quantity: 'nitrate', value: 12, unit: 'mg/L NO3' } });
    return { params: { testId: made.id }, body };
  }

  function csv(): FormData {
    const form = new FormData();
    const rows = `id,system,at,quantity,qualifier,value,unit,kit,note\r\n,,${now()},nitrate,=,12,mg/L NO3,,\r\n`;
    form.set('file', new Blob([rows], { type: 'text/csv' }), 'tests.csv');
    return form;
  }

  return {
    // What anybody may call fails on what it is given, and not on who calls.
    signIn: () => ({ body: { email: `${uuidv7()}@reef.example`, password: '' } }),
    refresh: () => ({}),
    signOut: () => ({}),
    welcomeState: () => ({}),
    welcome: () => ({ body: {} }),
    acceptInvite: () => ({ body: {} }),

    me: () => ({}),
    updateMe: () => ({ body: { name: 'Renamed' } }),
    changePassword: () => ({ body: { current: '', next: '' } }),
    sessions: () => ({}),
    endSession: async (person) => ({ params: { sessionId: await server.anotherSession(person) } }),

    listSites: () => ({}),
    createSite: () => ({ body: { name: 'Pier', timeZone: 'UTC' } }),
    listMembers: () => ofSite,
    invite: () => ({ ...ofSite, body: { email: `${uuidv7()}@reef.example`, role: 'viewer' } }),
    setRole: async () => ({ params: await memberOfSite(), body: { role: 'sitter' } }),
    removeMember: async () => ({ params: await memberOfSite() }),
    listAudit: () => ofSite,
    listOutbox: () => ofSite,

    listSystems: () => ({}),
    getSystem: () => ofSystem,
    createSystem: () => ({ ...ofSite, body: { name: 'Cube', displayLitres: 70, sumpLitres: 10, displacementLitres: 5 } }),
    updateSystem: () => ({ ...ofSystem, body: { name: 'Front window' } }),

    listProducts: () => ofSite,
    createProduct: () => ({ ...ofSite, body: { name: 'Other', form: 'liquid', composition: [], label: null } }),

    listDevices: () => ofSystem,
    createDevice: () => ({ ...ofSystem, body: { name: 'Probes', kind: 'probe' } }),
    renewCredentials: () => ({ params: { deviceId } }),
    listMessages: () => ({ params: { deviceId } }),
    listRejects: () => ({ params: { deviceId } }),

    listHeads: () => ofSystem,
    createHead: async () => {
      const { device } = await world.owner.api('createDevice', { ...ofSystem, body: { name: 'Pump', kind: 'pump' } });
      return { ...ofSystem, body: { deviceId: device.id, head: 2, kind: 'other', mlPerSecond: 1, smallestMl: 0.1 } };
    },
    updateHead: () => ({ params: { headId }, body: { mlPerSecond: 1.1 } }),
    listReservoirs: () => ofSystem,
    createReservoir: () => ({ ...ofSystem, body: { name: 'Spare', capacityMl: 500 } }),
    createRefill: () => ({ params: { reservoirId }, body: { productId, at: now(), ml: 500 } }),

    listSeries: () => ofSystem,
    updateSeries: () => ({ params: { seriesId }, body: { name: 'pH at the return' } }),
    getPoints: () => ({ params: { seriesId }, query: range }),
    listRuns: () => ofSystem,
    getTape: () => ofSystem,
    getDoses: () => ({ ...ofSystem, query: range }),

    listTests: () => ofSystem,
    createTest: () => ({ ...ofSystem, body: test() }),
    updateTest: (person) => testOf(person, { value: 13 }),
    deleteTest: (person) => testOf(person),
    importTests: () => ({ ...ofSystem, query: { dryRun: '1' }, form: csv() }),
    listHandDoses: () => ofSystem,
    createHandDose: () => ({ ...ofSystem, body: { productId, at: now(), ml: 1 } }),
    listEvents: () => ofSystem,
    createEvent: () => ({ ...ofSystem, body: { kind: 'cleaning', at: now() } }),

    putSchedule: () => ({ ...ofSystem, body: { heads: [{ headId, mlPerDay: 2, slots: 4 }] } }),
    stop: () => ({ ...ofSystem, body: {} }),
    resume: () => ({ ...ofSystem, body: {} }),
    listOrders: () => ofSystem,

    listAlarms: () => ({}),
    listSystemAlarms: () => ofSystem,
    getAlarm: () => alarm(),
    acknowledge: () => alarm(),
    take: () => alarm({ arriveAt: hoursAhead(1) }),
    shelve: () => alarm({ until: hoursAhead(1), reason: 'known' }),
    reset: () => alarm({ cause: 'found' }),
    listRules: () => ofSystem,
    putRule: () => ({ params: { systemId, code: 'volume-hour' }, body: { soft: 5, hard: 10 } }),

    createLiveTicket: () => ({ body: { systemIds: [systemId] } }),
  };
}
