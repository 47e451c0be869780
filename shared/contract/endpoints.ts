import { alarmEndpoints } from './alarms.ts';
import { authEndpoints } from './auth.ts';
import { controlEndpoints } from './control.ts';
import { deviceEndpoints } from './devices.ts';
import { liveEndpoints } from './live.ts';
import { productEndpoints } from './products.ts';
import { recordEndpoints } from './records.ts';
import { rigEndpoints } from './rig.ts';
import { siteEndpoints } from './sites.ts';
import { systemEndpoints } from './systems.ts';
import { telemetryEndpoints } from './telemetry.ts';

/** The endpoint table: routes, client, OpenAPI and the authorisation test are made from it. */
export const endpoints = {
  ...authEndpoints,
  ...siteEndpoints,
  ...systemEndpoints,
  ...productEndpoints,
  ...deviceEndpoints,
  ...rigEndpoints,
  ...telemetryEndpoints,
  ...recordEndpoints,
  ...controlEndpoints,
  ...alarmEndpoints,
  ...liveEndpoints,
} as const;

export type EndpointName = keyof typeof endpoints;
