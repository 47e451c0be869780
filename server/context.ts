import type { EndpointName } from '#shared/contract/endpoints.ts';
import { createAccessChanges } from './access/access-changes.ts';
import { createAlarms } from './alarms/create-alarms.ts';
import { alarmHandlers } from './api/alarms.ts';
import { authHandlers } from './api/auth.ts';
import { controlHandlers } from './api/control.ts';
import { deviceHandlers } from './api/devices.ts';
import { doseHandlers } from './api/doses.ts';
import { liveHandlers } from './api/live.ts';
import { messageHandlers } from './api/messages.ts';
import { productHandlers } from './api/products.ts';
import { recordHandlers } from './api/records.ts';
import { createRefreshCookie } from './api/refresh-cookie.ts';
import { rigHandlers } from './api/rig.ts';
import type { Handlers } from './api/route.ts';
import { siteHandlers } from './api/sites.ts';
import { systemHandlers } from './api/systems.ts';
import { telemetryHandlers } from './api/telemetry.ts';
import { createAuth } from './auth/create-auth.ts';
import { readJwtSecret } from './auth/jwt-secret.ts';
import { makeWelcomeCode } from './auth/welcome-code.ts';
import type { Core } from './core.ts';
import { createDevices } from './devices/create-devices.ts';
import { createDoses } from './doses/create-doses.ts';
import { createIngest } from './ingest/create-ingest.ts';
import { createJobs } from './jobs/create-jobs.ts';
import { createLateBroker } from './late-broker.ts';
import { createLive, type LiveOptions } from './live/create-live.ts';
import { createNotify } from './notify/create-notify.ts';
import { createSmtpMailer } from './notify/mailer.ts';
import { createOrders } from './orders/create-orders.ts';
import { createProducts } from './products/create-products.ts';
import { createHeads } from './rig/create-heads.ts';
import { createReservoirs } from './rig/create-reservoirs.ts';
import { createSchedules } from './schedules/create-schedules.ts';
import { createSites } from './sites/create-sites.ts';
import { createStops } from './stops/create-stops.ts';
import { createSystems } from './systems/create-systems.ts';
import { createTelemetry } from './telemetry/create-telemetry.ts';

export type Context = Awaited<ReturnType<typeof createContext>>;

/** The first account is made with a code that only whoever sees the terminal knows. */
async function welcomeCodeOf({ config, reader }: Core): Promise<string | null> {
  if (config.DEMO) return null;
  const anyone = await reader.selectFrom('user').select('id').limit(1).executeTakeFirst();
  return anyone === undefined ? makeWelcomeCode() : null;
}

function mailerOf(smtpUrl: string | undefined, publicUrl: string) {
  if (smtpUrl === undefined) return null;
  return createSmtpMailer(smtpUrl, `Steadfall <steadfall@${new URL(publicUrl).hostname}>`);
}

export interface ContextOptions {
  /** Where the server is reached when `PUBLIC_URL` does not say. */
  ownUrl: () => string;
  live?: LiveOptions;
}

/** Builds every service once, in the order in which they need each other. */
export async function createContext(core: Core, options: ContextOptions) {
  const { config } = core;
  const publicUrl = () => (config.PUBLIC_URL ?? options.ownUrl()).replace(/\/$/, '');
  const isSecure = config.TLS_CERT !== undefined || config.PUBLIC_URL?.startsWith('https:') === true;
  const broker = createLateBroker();
  const changes = createAccessChanges();
  const welcomeCode = await welcomeCodeOf(core);

  const auth = createAuth(core, { secret: readJwtSecret(config), welcomeCode }, changes);
  const notify = createNotify(core, mailerOf(config.SMTP_URL, config.PUBLIC_URL ?? 'http://localhost'));
  const sites = createSites({ core, changes, notify, publicUrl });
  const systems = createSystems(core);
  const products = createProducts(core);
  const devices = createDevices({ core, disconnect: broker.disconnect });
  const schedules = createSchedules(core, broker);
  const orders = createOrders(core, broker);
  const stops = createStops(core, orders, schedules);
  const heads = createHeads(core, schedules);
  const reservoirs = createReservoirs(core);
  const doses = createDoses(core);
  const alarms = createAlarms(core, stops);
  const ingest = createIngest(core, { ...orders.hooks, onRun: () => {} });
  const telemetry = createTelemetry(core);
  const live = createLive(core, changes, options.live);
  const jobs = createJobs(core);

  // Not partial: an endpoint without a handler does not compile.
  const handlers: Handlers<EndpointName> = {
    ...authHandlers(auth, createRefreshCookie(isSecure), config.PUBLIC_URL),
    ...siteHandlers(core, sites),
    ...systemHandlers(systems),
    ...productHandlers(products),
    ...deviceHandlers(devices),
    ...messageHandlers(ingest, telemetry),
    ...rigHandlers(heads, reservoirs),
    ...telemetryHandlers(telemetry),
    ...recordHandlers(core),
    ...doseHandlers(doses),
    ...controlHandlers({ schedules, stops, orders, listHeads: heads.list }),
    ...alarmHandlers(alarms),
    ...liveHandlers(live),
  };

  return {
    core,
    publicUrl,
    welcomeCode,
    broker,
    auth,
    devices,
    ingest,
    orders,
    schedules,
    alarms,
    live,
    jobs,
    handlers,
    /** Ends what works in the background, the newest first. The live stream has ended before. */
    async close() {
      await jobs.close();
      await alarms.close();
      stops.close();
      await orders.close();
      await schedules.close();
      await notify.close();
      await telemetry.close();
    },
  };
}
