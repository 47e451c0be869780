import type { FleetSystem } from '#shared/demo/fleet-plan.ts';
import { createPasswordHasher } from '../auth/password-hasher.ts';
import { addUser, userByEmail } from '../auth/users.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { createProducts } from '../products/create-products.ts';
import { addSite } from '../sites/add-site.ts';
import { demoId } from './demo-ids.ts';
import { demoTime } from './demo-time.ts';
import { DEMO_PASSWORD, demoPeople, demoSites, type DemoSite, type PersonKey } from './scenario.ts';
import { createSystemSeeder } from './seed-system.ts';

/** When the sites were set up, before everything else. */
const SET_UP_DAYS_AGO = 121;

/**
 * Writes the demo's people, rigs and records through the services, each with its clock set to the day on which it was done.
 * Every row has an id that follows from the anchor: run again with the same anchor it adds what is missing and nothing twice.
 * Devices get new passwords each time.
 */
export async function seedDemo(core: Core, anchorMs: number): Promise<FleetSystem[]> {
  const setUpMs = demoTime(anchorMs, SET_UP_DAYS_AGO, 8);
  const past: Core = { ...core, clock: { nowMs: () => setUpMs } };
  const users = await seedPeople(past, setUpMs);
  const products = createProducts(past);
  const seedSystem = createSystemSeeder(core, { anchorMs, setUpMs, userId: users.keeper });
  const fleet: FleetSystem[] = [];
  for (const site of demoSites) {
    const siteId = demoId(anchorMs, site.key);
    await seedSite(past, site, siteId, users, setUpMs);
    const { key, ...product } = site.product;
    await products.create({ siteId, userId: users.keeper, body: { ...product, id: demoId(anchorMs, key) } });
    for (const system of site.systems) fleet.push(await seedSystem(site, system));
  }
  return fleet;
}

async function seedPeople(core: Core, nowMs: number): Promise<Record<PersonKey, string>> {
  const hasher = createPasswordHasher();
  const add = async (key: PersonKey) => {
    const passwordHash = await hasher.hash(DEMO_PASSWORD);
    return core.writer.commit((tx) => {
      const person = demoPeople[key];
      return (userByEmail(tx, person.email) ?? addUser(tx, { ...person, passwordHash, nowMs })).id;
    });
  };
  return {
    ternOwner: await add('ternOwner'),
    keeper: await add('keeper'),
    ternSitter: await add('ternSitter'),
    quayOwner: await add('quayOwner'),
    quayViewer: await add('quayViewer'),
  };
}

async function seedSite(core: Core, site: DemoSite, siteId: string, users: Record<PersonKey, string>, nowMs: number): Promise<void> {
  await core.writer.commit((tx) => {
    if (tx.first(query.selectFrom('site').select('id').where('id', '=', siteId)) !== undefined) return;
    addSite(tx, { id: siteId, name: site.name, timeZone: site.timeZone, ownerId: users[site.owner], nowMs });
    for (const { person, role } of site.members) {
      tx.run(query.insertInto('membership').values({ siteId, userId: users[person], role, createdAtMs: nowMs }));
    }
  });
}
