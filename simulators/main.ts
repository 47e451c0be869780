import { mkdirSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { parseArgs } from 'node:util';
import { z } from 'zod';
import { commandHelp, parseCommand, type Command } from './control-line.ts';
import { createWorldClock } from './device/world-clock.ts';
import { probeChannels, type ProbeChannelName } from './probe/channels.ts';
import { createProbeDevice } from './probe/probe-device.ts';
import { createPumpDevice, type PumpDevice } from './pump/pump-device.ts';
import { readScenario, scenarioHelp } from './scenarios.ts';
import { createSimpleWater } from './water/simple-water.ts';

const help = `npm run simulate -- --device ID --password P [options]

One simulated device over MQTT, with the credentials of a registered one.

  --url URL         the broker (mqtt://127.0.0.1:1883)
  --device ID       the device's id, which is its username too
  --password P      its password
  --kind KIND       pump or probe (pump)
  --heads N         heads of the pump (1)
  --channels LIST   channels of the probe, with commas (all): ${Object.keys(probeChannels).join(', ')}
  --litres N        net volume of the water that the probe hangs in (400)
  --seed N          the same seed makes the same noise (1)
  --from TIME       start in the past, for example 2026-11-01T00:00:00Z (the present; a day ago with a speed)
  --speed N         run so many times as fast as the wall clock until it is caught up with (1)
  --state DIR       where the device keeps its memory (a folder by device id under the system's temporary folder)
  --scenario NAME   what goes wrong (steady)
  --help            this text

${scenarioHelp}

${commandHelp}`;

const DAY_MS = 86_400_000;

const optionsSchema = z.object({
  url: z.url('must be a URL such as mqtt://127.0.0.1:1883'),
  device: z.string('is needed').min(1),
  password: z.string('is needed').min(1),
  kind: z.enum(['pump', 'probe']),
  heads: z.coerce.number().int().min(1).max(16),
  channels: z
    .string()
    .transform((list) => list.split(','))
    .pipe(z.array(z.custom<ProbeChannelName>((name) => typeof name === 'string' && name in probeChannels, 'names no channel')).min(1)),
  litres: z.coerce.number().positive(),
  seed: z.coerce.number().int().min(0),
  from: z
    .string()
    .refine((text) => !Number.isNaN(Date.parse(text)), 'must be a time such as 2026-11-01T00:00:00Z')
    .transform((text) => Date.parse(text))
    .optional(),
  speed: z.coerce.number().min(1),
  state: z.string().optional(),
});
type Options = z.infer<typeof optionsSchema>;

const log = (line: string) => console.log(line);

function readOptions(): { options: Options; scenarioName: string; scenarioArgument: string | undefined } | string {
  const { values, positionals } = parseArgs({
    allowPositionals: true,
    options: {
      url: { type: 'string', default: 'mqtt://127.0.0.1:1883' },
      device: { type: 'string' },
      password: { type: 'string' },
      kind: { type: 'string', default: 'pump' },
      heads: { type: 'string', default: '1' },
      channels: { type: 'string', default: Object.keys(probeChannels).join(',') },
      litres: { type: 'string', default: '400' },
      seed: { type: 'string', default: '1' },
      from: { type: 'string' },
      speed: { type: 'string', default: '1' },
      state: { type: 'string' },
      scenario: { type: 'string', default: 'steady' },
      help: { type: 'boolean', default: false },
    },
  });
  if (values.help) return help;
  const parsed = optionsSchema.safeParse(values);
  if (!parsed.success) return parsed.error.issues.map((issue) => `--${issue.path.join('.')} ${issue.message}`).join('\n');
  return { options: parsed.data, scenarioName: values.scenario, scenarioArgument: positionals[0] };
}

function run({ options, scenarioName, scenarioArgument }: Exclude<ReturnType<typeof readOptions>, string>): void {
  const scenario = readScenario(scenarioName, scenarioArgument);
  if (scenario === null) {
    console.error(`--scenario ${scenarioName} is none of these\n${scenarioHelp}`);
    process.exitCode = 1;
    return;
  }
  const { faults } = scenario;
  const folder = options.state ?? path.join(tmpdir(), 'steadfall-simulators', options.device);
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  const { url, device: deviceId, password, seed } = options;
  let fromMs = options.from ?? (options.speed > 1 ? Date.now() - DAY_MS : Date.now());
  const clock = createWorldClock({
    fromMs,
    speed: options.speed,
    wallNowMs: () => Date.now(),
  });
  const shared = { url, deviceId, password, folder, clock, faults, seed, log };

  const water = createSimpleWater(
    {
      seed,
      netLitres: options.litres,
      lightsOnUtcH: 9,
      lightsOffUtcH: 20,
      carbonMgPerMl: 164.6,
      bottleMl: 1_000,
      temperatureC: 25.4,
      nitrateMgPerL: 15,
      phosphateMgPerL: 0.2,
    },
    fromMs,
  );
  let pump: PumpDevice | null = null;
  const start = () => {
    if (options.kind === 'probe') {
      const probe = createProbeDevice({ ...shared, channels: options.channels, water });
      probe.start(fromMs);
      return probe;
    }
    const heads = Array.from({ length: options.heads }, (_, index) => index + 1);
    pump = createPumpDevice({ ...shared, spec: { heads, defaultMlPerSecond: 1.1 } });
    return pump;
  };
  let device = start();
  if (scenario.offlineForMs !== null) {
    const offlineForMs = scenario.offlineForMs;
    void device.link.connected().then(() => device.link.goOffline(offlineForMs));
  }

  const restart = () => {
    device.cut();
    log('restart');
    fromMs = clock.nowMs();
    device = start();
  };
  const quit = async () => {
    input.close();
    await device.close();
    log('ended');
    process.exit();
  };

  function obey(command: Command): void {
    switch (command.do) {
      case 'dose': {
        const why = pump?.happen({ kind: 'button', head: command.head, ml: command.ml }) ?? null;
        if (why !== null) log(`refused (${why})`);
        return;
      }
      case 'calibrate': {
        const why = pump?.happen({ kind: 'calibrate', head: command.head, seconds: command.seconds }) ?? null;
        if (why !== null) log(`refused (${why})`);
        return;
      }
      case 'stick':
      case 'unstick':
        pump?.happen({ kind: 'tick' });
        faults.stuckHeads = faults.stuckHeads.filter((head) => head !== command.head);
        if (command.do === 'stick') faults.stuckHeads.push(command.head);
        pump?.happen({ kind: 'tick' });
        return;
      case 'offline':
        device.link.goOffline(command.seconds * 1_000);
        return;
      case 'silent':
        faults.isSilent = command.isOn;
        return;
      case 'clock':
        faults.isClockUnset = !command.isOn;
        pump?.happen({ kind: 'tick' });
        device.link.tellState();
        return;
      case 'restart':
        restart();
        return;
      case 'quit':
        void quit();
        return;
    }
  }

  const input = createInterface({ input: process.stdin });
  input.on('line', (line) => {
    if (line.trim() === '') return;
    const command = parseCommand(line);
    if (command === null) log(`not a command: ${line}\n${commandHelp}`);
    else obey(command);
  });
  process.on('SIGUSR2', restart);
  for (const signal of ['SIGINT', 'SIGTERM'] as const) process.once(signal, () => void quit());
}

const read = readOptions();
if (typeof read !== 'string') run(read);
else if (read === help) log(read);
else {
  console.error(`${read}\n\nnpm run simulate -- --help tells more`);
  process.exitCode = 1;
}
