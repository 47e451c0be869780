import type { FleetSystem } from '#shared/demo/fleet-plan.ts';
import type { Core } from '../core.ts';
import { createDevices } from '../devices/create-devices.ts';
import { demoId } from './demo-ids.ts';
import { demoTime } from './demo-time.ts';
import { demoSites, type DemoSite, type DemoSystem } from './scenario.ts';

/** 40 % ethanol by volume, mg of carbon per mL: only the water of the demo needs it. */
const CARBON_MG_PER_ML = 164.6;

const netLitresOf = (system: DemoSystem) => system.displayLitres + system.sumpLitres - system.displacementLitres;

/** What the scenario tells of the water, without the devices in it. */
export function demoWater(anchorMs: number, site: DemoSite, system: DemoSystem): Omit<FleetSystem, 'pump' | 'probe'> {
  const startOf = (quantity: 'nitrate' | 'phosphate') => system.results.find((one) => one.quantity === quantity)?.points[0]?.value ?? 0;
  const refills = system.reservoir?.refills ?? [];
  return {
    name: system.name,
    seed: system.seed,
    netLitres: netLitresOf(system),
    temperatureC: system.temperatureC,
    nitrateMgPerL: startOf('nitrate'),
    phosphateMgPerL: startOf('phosphate'),
    carbonMgPerMl: CARBON_MG_PER_ML,
    bottleMl: refills[0]?.ml ?? 0,
    events: [
      ...refills.map(({ daysAgo, ml }) => ({ kind: 'refill' as const, atMs: demoTime(anchorMs, daysAgo, 7), ml })),
      ...system.events
        .filter((event) => event.kind === 'water-change')
        .map((event) => ({
          kind: 'water-change' as const,
          atMs: demoTime(anchorMs, event.daysAgo, event.hour),
          share: (event.litres ?? 0) / netLitresOf(system),
        })),
      ...(site.product.form === 'liquid' ? system.handDoses : []).map(({ daysAgo, hour, ml }) => ({
        kind: 'carbon' as const,
        atMs: demoTime(anchorMs, daysAgo, hour),
        ml,
      })),
    ],
  };
}

/** The demo's devices with new passwords and no past to tell: for a data directory that came back without its demo folder. */
export async function renewDemoDevices(core: Core, anchorMs: number): Promise<FleetSystem[]> {
  const devices = createDevices({ core, disconnect: () => undefined });
  const keeper = await core.reader.selectFrom('user').select('id').limit(1).executeTakeFirstOrThrow();
  const systems: FleetSystem[] = [];
  for (const site of demoSites) {
    for (const system of site.systems) {
      const renewed = async (kind: 'pump' | 'probe') => {
        const deviceId = demoId(anchorMs, `${system.key} ${kind}`);
        const { credentials } = await devices.renewCredentials({ siteId: demoId(anchorMs, site.key), deviceId, userId: keeper.id });
        return { deviceId, password: credentials.password };
      };
      systems.push({
        ...demoWater(anchorMs, site, system),
        events: [],
        pump: system.pump === null ? null : { ...(await renewed('pump')), heads: [1], mlPerSecond: system.pump.mlPerSecond, schedules: [] },
        probe: system.probe === null ? null : { ...(await renewed('probe')), channels: system.probe.channels },
      });
    }
  }
  return systems;
}
