import { type Kysely, sql } from 'kysely';

/** Every table of the first version. STRICT, so that a text in a number column is an error and not a surprise. */
const statements = [
  `create table user (
    id text primary key, email text not null unique, name text not null, passwordHash text not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create table session (
    id text primary key, userId text not null references user(id), generation integer not null,
    rotatedAtMs integer not null, createdAtMs integer not null, expiresAtMs integer not null, revokedAtMs integer, userAgent text not null
  ) strict, without rowid`,
  `create index sessionByUser on session(userId)`,
  `create table site (id text primary key, name text not null, timeZone text not null, createdAtMs integer not null) strict, without rowid`,
  `create table membership (
    siteId text not null references site(id), userId text not null references user(id),
    role text not null check (role in ('owner','keeper','sitter','viewer')), createdAtMs integer not null, primary key (siteId, userId)
  ) strict, without rowid`,
  `create index membershipByUser on membership(userId)`,
  `create table invite (
    id text primary key, siteId text not null references site(id), email text not null, role text not null, tokenHash text not null unique,
    invitedBy text not null, createdAtMs integer not null, expiresAtMs integer not null, acceptedAtMs integer
  ) strict, without rowid`,
  `create table notice (
    id text primary key, dedupeKey text not null unique, siteId text, toAddress text not null, subject text not null, body text not null,
    state text not null, attempts integer not null, leaseUntilMs integer not null, createdAtMs integer not null, sentAtMs integer
  ) strict, without rowid`,
  `create table audit (
    seq integer primary key autoincrement, atMs integer not null, siteId text, actorKind text not null, actorId text not null,
    action text not null, entity text not null, entityId text not null, before text, after text
  ) strict`,
  `create index auditBySite on audit(siteId, seq)`,
  `create table system (
    id text primary key, siteId text not null references site(id), name text not null, displayLitres real not null, sumpLitres real not null,
    displacementLitres real not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create index systemBySite on system(siteId)`,
  `create table event (
    id text primary key, siteId text not null, systemId text not null references system(id), kind text not null, atMs integer not null,
    litres real, note text not null, actorId text not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create index eventBySystem on event(systemId, atMs)`,
  `create table device (
    id text primary key, siteId text not null references site(id), systemId text not null references system(id), name text not null,
    kind text not null, secretHash text not null, credentialVersion integer not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create index deviceBySystem on device(systemId)`,
  `create table deviceState (
    deviceId text primary key references device(id), online integer not null, heardAtMs integer not null, changedAtMs integer not null,
    scheduleVersion integer, clockOffsetMs integer, clockUnset integer not null, heads text not null
  ) strict, without rowid`,
  `create table ignoredField (
    deviceId text not null references device(id), field text not null, count integer not null, primary key (deviceId, field)
  ) strict, without rowid`,
  `create table product (
    id text primary key, siteId text not null references site(id), name text not null, form text not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create index productBySite on product(siteId)`,
  `create table productRevision (
    id text primary key, productId text not null references product(id), siteId text not null, composition text not null, labelMl real,
    labelMaxMl real, labelPerLitres real, labelPerDays real, oxygenDemandMgPerMl real, carbonMgPerMl real, fromMs integer not null,
    actorId text not null
  ) strict, without rowid`,
  `create index productRevisionByProduct on productRevision(productId, fromMs)`,
  `create table reservoir (
    id text primary key, siteId text not null, systemId text not null references system(id), name text not null, capacityMl real not null,
    levelSeriesId text, createdAtMs integer not null
  ) strict, without rowid`,
  `create index reservoirBySystem on reservoir(systemId)`,
  `create table refill (
    id text primary key, siteId text not null, reservoirId text not null references reservoir(id), productRevisionId text not null,
    atMs integer not null, ml real not null, lot text not null, actorId text not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create index refillByReservoir on refill(reservoirId, atMs)`,
  `create table head (
    id text primary key, siteId text not null, deviceId text not null references device(id), head integer not null,
    createdAtMs integer not null, unique (deviceId, head)
  ) strict, without rowid`,
  `create table headAssignment (
    id text primary key, siteId text not null, headId text not null references head(id), systemId text not null references system(id),
    kind text not null, productId text, reservoirId text, mlPerSecond real not null, smallestMl real not null, fromMs integer not null,
    toMs integer, actorId text not null
  ) strict, without rowid`,
  `create index headAssignmentByHead on headAssignment(headId, fromMs)`,
  `create index headAssignmentBySystem on headAssignment(systemId, fromMs)`,
  `create table series (
    key integer primary key, id text not null unique, siteId text not null, systemId text not null references system(id),
    deviceId text not null references device(id), channel text not null, name text, quantity text, unit text not null, lastMs integer,
    lastValue real, conflicts integer not null, createdAtMs integer not null, unique (deviceId, channel)
  ) strict`,
  `create index seriesBySystem on series(systemId)`,
  `create table sample (
    seriesKey integer not null, tMs integer not null, value real not null, lagMs integer not null, primary key (seriesKey, tMs)
  ) strict, without rowid`,
  `create table sampleConflict (
    seq integer primary key autoincrement, seriesKey integer not null, tMs integer not null, keptValue real not null,
    otherValue real not null, receivedMs integer not null
  ) strict`,
  `create index sampleConflictBySeries on sampleConflict(seriesKey, seq)`,
  `create table rollup (
    levelMs integer not null, seriesKey integer not null, bucketMs integer not null, count integer not null, min real not null,
    max real not null, sum real not null, firstMs integer not null, first real not null, lastMs integer not null, last real not null,
    primary key (levelMs, seriesKey, bucketMs)
  ) strict, without rowid`,
  `create table reject (
    seq integer primary key autoincrement, siteId text not null, systemId text not null, deviceId text not null, topic text not null,
    reason text not null, payload text not null, receivedMs integer not null
  ) strict`,
  `create index rejectByDevice on reject(deviceId, seq)`,
  `create table rejectCount (
    deviceId text not null, reason text not null, count integer not null, lastMs integer not null, primary key (deviceId, reason)
  ) strict, without rowid`,
  `create table run (
    deviceId text not null references device(id), run text not null, siteId text not null, systemId text not null, headId text,
    head integer not null, kind text not null, productRevisionId text, cause text not null, orderId text, scheduleVersion integer,
    dueMs integer, begunMs integer not null, begunReceivedMs integer, endedMs integer, ml real not null, onMs integer, odometerMl real,
    odometerEpoch integer, interrupted integer not null, endedPayload text, flags text not null, receivedMs integer not null,
    primary key (deviceId, run)
  ) strict, without rowid`,
  `create index runBySystem on run(systemId, begunMs)`,
  `create index runOpen on run(systemId) where endedMs is null`,
  `create table doseLedger (
    seq integer primary key autoincrement, siteId text not null, systemId text not null, sourceKind text not null, sourceId text not null,
    step integer not null, headId text, kind text not null, productRevisionId text, atMs integer not null, deltaMl real not null,
    oxygenDemandMg real, receivedMs integer not null, unique (sourceKind, sourceId, step)
  ) strict`,
  `create index doseLedgerBySystem on doseLedger(systemId, atMs)`,
  `create table handDose (
    id text primary key, siteId text not null, systemId text not null references system(id), productId text not null,
    productRevisionId text not null, atMs integer not null, ml real not null, actorId text not null, createdAtMs integer not null
  ) strict, without rowid`,
  `create index handDoseBySystem on handDose(systemId, atMs)`,
  `create table test (
    id text primary key, siteId text not null, systemId text not null references system(id), atMs integer not null, quantity text not null,
    qualifier text not null, value real not null, unit text not null, canonicalMgPerL real not null, note text not null,
    actorId text not null, createdAtMs integer not null, updatedAtMs integer not null, deletedAtMs integer
  ) strict, without rowid`,
  `create index testBySystem on test(systemId, atMs)`,
  `create table testRevision (
    seq integer primary key autoincrement, testId text not null, siteId text not null, atMs integer not null, actorId text not null,
    before text not null, after text not null
  ) strict`,
  `create index testRevisionByTest on testRevision(testId, seq)`,
  `create table scheduleVersion (
    deviceId text not null references device(id), version integer not null, siteId text not null, body text not null,
    fromMs integer not null, cause text not null, actorKind text not null, actorId text not null, publishedAtMs integer,
    primary key (deviceId, version)
  ) strict, without rowid`,
  `create index scheduleVersionToPublish on scheduleVersion(deviceId) where publishedAtMs is null`,
  `create index scheduleVersionByTime on scheduleVersion(deviceId, fromMs)`,
  `create table headSchedule (
    id text primary key, siteId text not null, headId text not null references head(id), mlPerDay real not null, slotMl real not null,
    slotsUtcMin text not null, overrideReason text, fromMs integer not null, toMs integer, actorId text not null
  ) strict, without rowid`,
  `create index headScheduleByHead on headSchedule(headId, fromMs)`,
  `create table headStop (
    id text primary key, siteId text not null, systemId text not null, deviceId text not null, head integer not null, cause text not null,
    alarmId text, stoppedAtMs integer not null, confirmedAtMs integer, actorKind text not null, actorId text not null, resumedAtMs integer,
    resumedBy text
  ) strict, without rowid`,
  `create unique index headStopOpen on headStop(deviceId, head) where resumedAtMs is null`,
  `create index headStopBySystem on headStop(systemId, stoppedAtMs)`,
  `create table deviceOrder (
    id text primary key, siteId text not null, deviceId text not null references device(id), head integer not null, do text not null,
    args text not null, createdAtMs integer not null, expiresAtMs integer, state text not null, attempts integer not null,
    nextSendMs integer not null, outcomeAtMs integer, why text, causeAlarmId text, actorKind text not null, actorId text not null
  ) strict, without rowid`,
  `create index deviceOrderWaiting on deviceOrder(nextSendMs) where state = 'waiting'`,
  `create index deviceOrderByDevice on deviceOrder(deviceId, createdAtMs)`,
  `create table alarmRule (
    id text primary key, siteId text not null, systemId text not null references system(id), code text not null, target text not null,
    enabled integer not null, priority text not null, soft real, hard real, unit text not null, interlock integer not null,
    onDelaySeconds real not null, offDelaySeconds real not null, deadband real not null, revision integer not null,
    updatedAtMs integer not null, unique (systemId, code, target)
  ) strict, without rowid`,
  `create table alarmRuleRevision (
    ruleId text not null references alarmRule(id), revision integer not null, siteId text not null, body text not null,
    atMs integer not null, actorId text not null, primary key (ruleId, revision)
  ) strict, without rowid`,
  `create table alarm (
    id text primary key, siteId text not null, systemId text not null references system(id), code text not null, target text not null,
    limitKind text not null, priority text not null, active integer not null, acknowledged integer not null, latched integer not null,
    interlock integer not null, shelvedUntilMs integer, raisedAtMs integer not null, returnedAtMs integer, closedAtMs integer, value real,
    limitValue real, unit text not null, evidence text not null, takenBy text, arriveAtMs integer, tripKey text not null,
    tripSeq integer not null
  ) strict, without rowid`,
  `create index alarmBySystem on alarm(systemId, raisedAtMs)`,
  `create unique index alarmOpen on alarm(systemId, code, target, limitKind) where closedAtMs is null`,
  `create table alarmTransition (
    seq integer primary key autoincrement, alarmId text not null references alarm(id), siteId text not null, atMs integer not null,
    action text not null, stateBefore text not null, stateAfter text not null, actorKind text not null, actorId text not null, reason text
  ) strict`,
  `create index alarmTransitionByAlarm on alarmTransition(alarmId, seq)`,
  `create table alarmPending (
    systemId text not null, code text not null, target text not null, limitKind text not null, edge text not null, sinceMs integer not null,
    primary key (systemId, code, target, limitKind)
  ) strict, without rowid`,
  `create table dirtySystem (systemId text primary key, sinceMs integer not null) strict, without rowid`,
  `create table job (
    name text primary key, leaseOwner text, leaseUntilMs integer not null, fencingToken integer not null, cursor text
  ) strict, without rowid`,
  `create table change (
    seq integer primary key autoincrement, systemId text not null, type text not null, atMs integer not null, payload text not null
  ) strict`,
  `create index changeByTime on change(atMs)`,
  `create table claimedId (
    id text primary key, siteId text not null, kind text not null, bodyHash text not null, createdAtMs integer not null
  ) strict, without rowid`,
];

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db);
}
