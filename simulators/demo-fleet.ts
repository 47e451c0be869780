import { readFileSync } from 'node:fs';
import { FLEET_READY_LINE, fleetPlanSchema } from '#shared/demo/fleet-plan.ts';
import { createDemoSystem } from './demo/demo-system.ts';
import { createWorldClock } from './device/world-clock.ts';

/**
 * All devices of the demo in one process: tells their past over MQTT at the first start, fills the gap at a later one, and then
 * lives in the present. It is told what to play by a file with the devices' passwords, and ends when its standard input closes,
 * so that it never outlives whoever started it.
 */
async function main(planFile: string): Promise<void> {
  const plan = fleetPlanSchema.parse(JSON.parse(readFileSync(planFile, 'utf8')));
  const clock = createWorldClock({ speed: 1, wallNowMs: () => Date.now() });
  const systems = plan.systems.map((system) => createDemoSystem(plan, system, clock, (line) => console.log(line)));

  // Without a goodbye: to the server these are devices far away, which do not end when it does.
  const end = () => {
    for (const system of systems) system.cut();
    process.exit();
  };
  // A terminal sends Ctrl-C to the whole group; this process ends with the one that started it, and not before.
  process.on('SIGINT', () => undefined);
  process.on('SIGTERM', end);
  process.stdin.on('end', end).on('error', end).resume();

  const shares = systems.map(() => 0);
  let told = -1;
  await Promise.all(
    systems.map((system, index) =>
      system.live((share) => {
        shares[index] = share;
        const tenths = Math.floor((10 * shares.reduce((sum, one) => sum + one, 0)) / shares.length);
        if (tenths === told || systems.every((one) => !one.isFirst)) return;
        told = tenths;
        console.log(`history ${tenths * 10} %`);
      }),
    ),
  );
  console.log(FLEET_READY_LINE);
}

const [planFile] = process.argv.slice(2);
if (planFile === undefined) {
  console.error('usage: demo-fleet.ts PLAN-FILE');
  process.exitCode = 1;
} else await main(planFile);
