import type { Generated, Insertable, Selectable } from 'kysely';

/**
 * Row types of every table. Column names and row types share one case. Times are UTC epoch milliseconds; flags are 0 or 1.
 * In one file, long as it is, because it is read as one picture and changes together with a migration.
 */

export interface UserTable {
  id: string;
  email: string;
  name: string;
  passwordHash: string;
  createdAtMs: number;
}

export interface SessionTable {
  id: string;
  userId: string;
  /** How often the refresh token was rotated. The one of this generation is good; any older one is a second tab or theft. */
  generation: number;
  rotatedAtMs: number;
  createdAtMs: number;
  expiresAtMs: number;
  revokedAtMs: number | null;
  userAgent: string;
}

export interface SiteTable {
  id: string;
  name: string;
  timeZone: string;
  createdAtMs: number;
}

export interface MembershipTable {
  siteId: string;
  userId: string;
  role: 'owner' | 'keeper' | 'sitter' | 'viewer';
  createdAtMs: number;
}

export interface InviteTable {
  id: string;
  siteId: string;
  email: string;
  role: MembershipTable['role'];
  tokenHash: string;
  invitedBy: string;
  createdAtMs: number;
  expiresAtMs: number;
  acceptedAtMs: number | null;
}

/** Mail to be sent, or, without SMTP, the local outbox that the app shows. */
export interface NoticeTable {
  id: string;
  dedupeKey: string;
  siteId: string | null;
  toAddress: string;
  subject: string;
  body: string;
  state: 'waiting' | 'sent' | 'kept' | 'failed';
  attempts: number;
  leaseUntilMs: number;
  createdAtMs: number;
  sentAtMs: number | null;
}

export interface AuditTable {
  seq: Generated<number>;
  atMs: number;
  siteId: string | null;
  actorKind: ActorKind;
  actorId: string;
  action: string;
  entity: string;
  entityId: string;
  before: string | null;
  after: string | null;
}

export type ActorKind = 'user' | 'device' | 'system';

export interface SystemTable {
  id: string;
  siteId: string;
  name: string;
  displayLitres: number;
  sumpLitres: number;
  displacementLitres: number;
  createdAtMs: number;
}

export interface EventTable {
  id: string;
  siteId: string;
  systemId: string;
  kind: string;
  atMs: number;
  litres: number | null;
  note: string;
  actorId: string;
  createdAtMs: number;
}

export interface DeviceTable {
  id: string;
  siteId: string;
  systemId: string;
  name: string;
  kind: 'pump' | 'probe' | 'other';
  secretHash: string;
  credentialVersion: number;
  createdAtMs: number;
}

/** What a device last said of itself, one row a device once it was heard. */
export interface DeviceStateTable {
  deviceId: string;
  online: number;
  /** Arrival of the newest message of any kind. */
  heardAtMs: number;
  /** When `online` last changed. */
  changedAtMs: number;
  scheduleVersion: number | null;
  /** Newest `state.atMs` less its arrival; null when the device's clock is unset or it sent no time. */
  clockOffsetMs: number | null;
  clockUnset: number;
  /** JSON array of `{head, state, odometerMl, odometerEpoch}` as last reported. */
  heads: string;
}

/** How often a device sent a SenML field that is not kept. */
export interface IgnoredFieldTable {
  deviceId: string;
  field: string;
  count: number;
}

export interface ProductTable {
  id: string;
  siteId: string;
  name: string;
  form: 'liquid' | 'pellets';
  createdAtMs: number;
}

export interface ProductRevisionTable {
  id: string;
  productId: string;
  siteId: string;
  composition: string;
  labelMl: number | null;
  labelMaxMl: number | null;
  labelPerLitres: number | null;
  labelPerDays: number | null;
  /** Theoretical oxygen demand, mg O2 per mL of product; null when the composition is unknown. */
  oxygenDemandMgPerMl: number | null;
  carbonMgPerMl: number | null;
  fromMs: number;
  actorId: string;
}

export interface ReservoirTable {
  id: string;
  siteId: string;
  systemId: string;
  name: string;
  capacityMl: number;
  levelSeriesId: string | null;
  createdAtMs: number;
}

export interface RefillTable {
  id: string;
  siteId: string;
  reservoirId: string;
  productRevisionId: string;
  atMs: number;
  ml: number;
  lot: string;
  actorId: string;
  createdAtMs: number;
}

export interface HeadTable {
  id: string;
  siteId: string;
  deviceId: string;
  head: number;
  createdAtMs: number;
}

/** What a head was used for, from when to when. A run takes the assignment in force when it began. */
export interface HeadAssignmentTable {
  id: string;
  siteId: string;
  headId: string;
  systemId: string;
  kind: 'carbon' | 'other';
  productId: string | null;
  reservoirId: string | null;
  mlPerSecond: number;
  smallestMl: number;
  fromMs: number;
  toMs: number | null;
  actorId: string;
}

export interface SeriesTable {
  key: Generated<number>;
  id: string;
  siteId: string;
  systemId: string;
  deviceId: string;
  channel: string;
  name: string | null;
  quantity: string | null;
  unit: string;
  lastMs: number | null;
  lastValue: number | null;
  conflicts: number;
  createdAtMs: number;
}

export interface SampleTable {
  seriesKey: number;
  tMs: number;
  value: number;
  lagMs: number;
}

export interface SampleConflictTable {
  seq: Generated<number>;
  seriesKey: number;
  tMs: number;
  keptValue: number;
  otherValue: number;
  receivedMs: number;
}

export interface RollupTable {
  levelMs: number;
  seriesKey: number;
  bucketMs: number;
  count: number;
  min: number;
  max: number;
  sum: number;
  firstMs: number;
  first: number;
  lastMs: number;
  last: number;
}

export interface RejectTable {
  seq: Generated<number>;
  siteId: string;
  systemId: string;
  deviceId: string;
  topic: string;
  reason: string;
  payload: string;
  receivedMs: number;
}

export interface RejectCountTable {
  deviceId: string;
  reason: string;
  count: number;
  lastMs: number;
}

export interface RunTable {
  deviceId: string;
  run: string;
  siteId: string;
  systemId: string;
  headId: string | null;
  head: number;
  /** What the head was used for when the run began; an unregistered head counts as carbon. */
  kind: 'carbon' | 'other';
  productRevisionId: string | null;
  cause: 'schedule' | 'order' | 'button' | 'prime' | 'calibration';
  orderId: string | null;
  scheduleVersion: number | null;
  dueMs: number | null;
  begunMs: number;
  /** Arrival of `begun`, which starts the clock of `run-too-long`. */
  begunReceivedMs: number | null;
  endedMs: number | null;
  ml: number;
  onMs: number | null;
  odometerMl: number | null;
  odometerEpoch: number | null;
  interrupted: number;
  /** The payload of the first `ended`, which stays on record when a second differs. */
  endedPayload: string | null;
  /** JSON array of codes such as `clock-unset`, `clock-off`, `second-ended`. */
  flags: string;
  receivedMs: number;
}

/** Append-only. Every limit reads this one ledger; a correction is a row with a negative delta. */
export interface DoseLedgerTable {
  seq: Generated<number>;
  siteId: string;
  systemId: string;
  sourceKind: 'run' | 'hand';
  sourceId: string;
  step: number;
  headId: string | null;
  kind: 'carbon' | 'other';
  productRevisionId: string | null;
  atMs: number;
  deltaMl: number;
  oxygenDemandMg: number | null;
  receivedMs: number;
}

export interface HandDoseTable {
  id: string;
  siteId: string;
  systemId: string;
  productId: string;
  productRevisionId: string;
  atMs: number;
  ml: number;
  actorId: string;
  createdAtMs: number;
}

export interface TestTable {
  id: string;
  siteId: string;
  systemId: string;
  atMs: number;
  quantity: string;
  /** `<` below the value given (censored), `=` as measured. */
  qualifier: '<' | '=';
  value: number;
  unit: string;
  canonicalMgPerL: number;
  note: string;
  actorId: string;
  createdAtMs: number;
  updatedAtMs: number;
  deletedAtMs: number | null;
}

export interface TestRevisionTable {
  seq: Generated<number>;
  testId: string;
  siteId: string;
  atMs: number;
  actorId: string;
  before: string;
  after: string;
}

export interface ScheduleVersionTable {
  deviceId: string;
  version: number;
  siteId: string;
  /** The retained payload, exactly as published. */
  body: string;
  fromMs: number;
  cause: string;
  actorKind: ActorKind;
  actorId: string;
  /** When the broker took it; null until then, so that a restart in between publishes it. */
  publishedAtMs: number | null;
}

/** The dose set for one head: what a schedule version is made from. */
export interface HeadScheduleTable {
  id: string;
  siteId: string;
  headId: string;
  mlPerDay: number;
  slotMl: number;
  slotsUtcMin: string;
  overrideReason: string | null;
  fromMs: number;
  toMs: number | null;
  actorId: string;
}

/** A head that is kept stopped. Open while `resumedAtMs` is null. */
export interface HeadStopTable {
  id: string;
  siteId: string;
  systemId: string;
  deviceId: string;
  head: number;
  cause: 'person' | 'interlock';
  alarmId: string | null;
  stoppedAtMs: number;
  /** Arrival of the pump's own word that the head is stopped; null until then, and again once the pump says otherwise. */
  confirmedAtMs: number | null;
  actorKind: ActorKind;
  actorId: string;
  resumedAtMs: number | null;
  resumedBy: string | null;
}

export interface DeviceOrderTable {
  id: string;
  siteId: string;
  deviceId: string;
  head: number;
  do: 'stop' | 'resume' | 'dose' | 'prime';
  args: string;
  createdAtMs: number;
  expiresAtMs: number | null;
  state: 'waiting' | 'done' | 'refused' | 'expired' | 'superseded';
  attempts: number;
  nextSendMs: number;
  outcomeAtMs: number | null;
  why: string | null;
  causeAlarmId: string | null;
  actorKind: ActorKind;
  actorId: string;
}

export interface AlarmRuleTable {
  id: string;
  siteId: string;
  systemId: string;
  code: string;
  target: string;
  enabled: number;
  priority: Priority;
  soft: number | null;
  hard: number | null;
  unit: string;
  interlock: number;
  onDelaySeconds: number;
  offDelaySeconds: number;
  deadband: number;
  revision: number;
  updatedAtMs: number;
}

export type Priority = 'low' | 'medium' | 'high' | 'urgent';

export interface AlarmRuleRevisionTable {
  ruleId: string;
  revision: number;
  siteId: string;
  body: string;
  atMs: number;
  actorId: string;
}

/** One row an occurrence, soft and hard apart. Closed when neither active, unacknowledged, latched nor shelved. */
export interface AlarmTable {
  id: string;
  siteId: string;
  systemId: string;
  code: string;
  target: string;
  limitKind: 'soft' | 'hard';
  priority: Priority;
  active: number;
  acknowledged: number;
  latched: number;
  interlock: number;
  shelvedUntilMs: number | null;
  raisedAtMs: number;
  returnedAtMs: number | null;
  closedAtMs: number | null;
  value: number | null;
  limitValue: number | null;
  unit: string;
  evidence: string;
  takenBy: string | null;
  arriveAtMs: number | null;
  /** What tripped it (a run, a whole system): the same cause trips again only with more volume in the ledger than `tripSeq`. */
  tripKey: string;
  tripSeq: number;
}

export interface AlarmTransitionTable {
  seq: Generated<number>;
  alarmId: string;
  siteId: string;
  atMs: number;
  action: string;
  stateBefore: string;
  stateAfter: string;
  actorKind: ActorKind;
  actorId: string;
  reason: string | null;
}

/** A condition that is true (or gone) but whose delay has not yet passed. */
export interface AlarmPendingTable {
  systemId: string;
  code: string;
  target: string;
  limitKind: 'soft' | 'hard';
  edge: 'on' | 'off';
  sinceMs: number;
}

export interface DirtySystemTable {
  systemId: string;
  sinceMs: number;
}

export interface JobTable {
  name: string;
  leaseOwner: string | null;
  leaseUntilMs: number;
  fencingToken: number;
  cursor: string | null;
}

/** What the live stream sends and resumes from; kept 24 h. */
export interface ChangeTable {
  seq: Generated<number>;
  systemId: string;
  type: 'samples' | 'run' | 'state' | 'test' | 'event' | 'alarm' | 'plan';
  atMs: number;
  payload: string;
}

/** Every id that a create was given or made, with the hash of its body: a repeated request is told from another one. */
export interface ClaimedIdTable {
  id: string;
  siteId: string;
  kind: string;
  bodyHash: string;
  createdAtMs: number;
}

export interface Database {
  user: UserTable;
  session: SessionTable;
  site: SiteTable;
  membership: MembershipTable;
  invite: InviteTable;
  notice: NoticeTable;
  audit: AuditTable;
  system: SystemTable;
  event: EventTable;
  device: DeviceTable;
  deviceState: DeviceStateTable;
  ignoredField: IgnoredFieldTable;
  product: ProductTable;
  productRevision: ProductRevisionTable;
  reservoir: ReservoirTable;
  refill: RefillTable;
  head: HeadTable;
  headAssignment: HeadAssignmentTable;
  series: SeriesTable;
  sample: SampleTable;
  sampleConflict: SampleConflictTable;
  rollup: RollupTable;
  reject: RejectTable;
  rejectCount: RejectCountTable;
  run: RunTable;
  doseLedger: DoseLedgerTable;
  handDose: HandDoseTable;
  test: TestTable;
  testRevision: TestRevisionTable;
  scheduleVersion: ScheduleVersionTable;
  headSchedule: HeadScheduleTable;
  headStop: HeadStopTable;
  deviceOrder: DeviceOrderTable;
  alarmRule: AlarmRuleTable;
  alarmRuleRevision: AlarmRuleRevisionTable;
  alarm: AlarmTable;
  alarmTransition: AlarmTransitionTable;
  alarmPending: AlarmPendingTable;
  dirtySystem: DirtySystemTable;
  job: JobTable;
  change: ChangeTable;
  claimedId: ClaimedIdTable;
}

export type Row<Table extends keyof Database> = Selectable<Database[Table]>;
export type NewRow<Table extends keyof Database> = Insertable<Database[Table]>;
