export interface TimeRange {
  fromMs: number;
  toMs: number;
}

/** Every query key, made in one place. What belongs to a system starts with `['system', systemId]`, so that a gap clears it whole. */
export const keys = {
  welcome: () => ['welcome'] as const,
  me: () => ['me'] as const,
  sessions: () => ['me', 'sessions'] as const,
  sites: () => ['sites'] as const,
  members: (siteId: string) => ['site', siteId, 'members'] as const,
  mail: (siteId: string) => ['site', siteId, 'mail'] as const,
  audit: (siteId: string) => ['site', siteId, 'audit'] as const,
  products: (siteId: string) => ['site', siteId, 'products'] as const,
  systems: () => ['systems'] as const,
  system: (systemId: string) => ['system', systemId] as const,
  systemDetail: (systemId: string) => ['system', systemId, 'detail'] as const,
  heads: (systemId: string) => ['system', systemId, 'heads'] as const,
  reservoirs: (systemId: string) => ['system', systemId, 'reservoirs'] as const,
  devices: (systemId: string) => ['system', systemId, 'devices'] as const,
  messages: (deviceId: string) => ['device', deviceId, 'messages'] as const,
  rejects: (deviceId: string) => ['device', deviceId, 'rejects'] as const,
  series: (systemId: string) => ['system', systemId, 'series'] as const,
  allPoints: (systemId: string) => ['system', systemId, 'points'] as const,
  points: (systemId: string, seriesId: string, range: TimeRange, count: number) =>
    ['system', systemId, 'points', seriesId, range.fromMs, range.toMs, count] as const,
  tape: (systemId: string) => ['system', systemId, 'tape'] as const,
  allDoses: (systemId: string) => ['system', systemId, 'doses'] as const,
  doses: (systemId: string, range: TimeRange, count: number) => ['system', systemId, 'doses', range.fromMs, range.toMs, count] as const,
  runs: (systemId: string) => ['system', systemId, 'runs'] as const,
  tests: (systemId: string) => ['system', systemId, 'tests'] as const,
  handDoses: (systemId: string) => ['system', systemId, 'hand-doses'] as const,
  events: (systemId: string) => ['system', systemId, 'events'] as const,
  alarms: (systemId: string) => ['system', systemId, 'alarms'] as const,
  alarmLog: (systemId: string) => ['system', systemId, 'alarm-log'] as const,
  alarm: (alarmId: string) => ['alarm', alarmId] as const,
  rules: (systemId: string) => ['system', systemId, 'rules'] as const,
};
