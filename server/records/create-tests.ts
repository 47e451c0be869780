import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { recordEndpoints, Test, TestQuantity } from '#shared/contract/records.ts';
import { isAtLeast, type Role } from '#shared/domain/role.ts';
import { recordAudit } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { readRows } from '../db/read-rows.ts';
import { comesAfter, type PageRequest } from '../db/seek.ts';
import { BadInputError, ForbiddenError, NotFoundError } from '../errors.ts';
import { claimId, idTaken, renewClaim } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { systemOfSite } from '../systems/system-rows.ts';
import { readTest, type ReadTest, type WrittenTest } from './read-test.ts';
import { changeTest, insertTest, testById } from './store-test.ts';
import { testOf, type TestRow, testRows } from './test-rows.ts';

type CreateBody = BodyOf<typeof recordEndpoints.createTest>;
type UpdateBody = BodyOf<typeof recordEndpoints.updateTest>;

/** Who asks, and as what. */
export interface Member {
  siteId: string;
  userId: string;
  role: Role;
}

export interface TestFilter {
  fromMs?: number;
  toMs?: number;
  quantity?: TestQuantity;
}

export interface Tests {
  /** Rows, newest first, as many as the request asks for. */
  page(systemId: string, filter: TestFilter, request: PageRequest): Promise<TestRow[]>;
  create(input: Member & { systemId: string; body: CreateBody }): Promise<Made<Test>>;
  update(input: Member & { testId: string; body: UpdateBody }): Promise<Test>;
  remove(input: Member & { testId: string }): Promise<void>;
}

/** @throws {BadInputError} for what cannot be. */
function checked(test: WrittenTest, nowMs: number): ReadTest {
  const read = readTest(test, nowMs);
  if ('errors' in read) throw new BadInputError(read.errors);
  return read;
}

/** @throws {ForbiddenError} when it is somebody else's, for a sitter. */
function checkOwn(member: Member, row: TestRow): void {
  if (row.actorId === member.userId || isAtLeast(member.role, 'keeper')) return;
  throw new ForbiddenError("A sitter may change one's own tests only; ask the keeper");
}

export function createTests(core: Core): Tests {
  return {
    page(systemId, filter, { limit, after }) {
      let rows = testRows().where('test.systemId', '=', systemId).where('test.deletedAtMs', 'is', null);
      if (filter.fromMs !== undefined) rows = rows.where('test.atMs', '>=', filter.fromMs);
      if (filter.toMs !== undefined) rows = rows.where('test.atMs', '<', filter.toMs);
      if (filter.quantity !== undefined) rows = rows.where('test.quantity', '=', filter.quantity);
      if (after !== null) rows = rows.where(comesAfter('test.atMs', 'test.id', after));
      return readRows(core.reader, rows.orderBy('test.atMs', 'desc').orderBy('test.id', 'desc').limit(limit));
    },

    create(input) {
      const { siteId, systemId, userId, body } = input;
      const { id: givenId, ...fields } = body;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const claim = { siteId, kind: `test:${systemId}`, body: fields, nowMs };
        if (tx.first(systemOfSite(siteId, systemId)) === undefined) throw new NotFoundError('There is no such system in your sites');
        const existing = givenId === undefined ? undefined : testById(tx, givenId);

        if (existing !== undefined && existing.systemId === systemId && existing.deletedAtMs !== null) {
          checkOwn(input, existing);
          const test = checked(fields, nowMs);
          renewClaim(tx, { ...claim, id: existing.id });
          const row = changeTest(tx, { siteId, userId, nowMs, action: 'restore' }, existing, { ...test, deletedAtMs: null });
          return { value: testOf(row), isRepeated: false };
        }

        const { id, isRepeated } = claimId(tx, { ...claim, id: givenId });
        if (isRepeated && existing !== undefined) return { value: testOf(existing), isRepeated };
        if (existing !== undefined) throw idTaken();
        const row = insertTest(tx, { siteId, systemId, userId, nowMs, id }, checked(fields, nowMs));
        recordAudit(tx, {
          atMs: nowMs,
          siteId,
          actor: { kind: 'user', id: userId },
          action: 'create',
          entity: 'test',
          entityId: id,
          after: testOf(row),
        });
        return { value: testOf(row), isRepeated };
      });
    },

    update(input) {
      const { siteId, userId, testId, body } = input;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const before = testById(tx, testId);
        if (before === undefined || before.siteId !== siteId || before.deletedAtMs !== null)
          throw new NotFoundError('There is no such test');
        checkOwn(input, before);
        const { at, quantity, value, unit, below, note } = testOf(before);
        const after = checked({ at, quantity, value, unit, below, note, ...body }, nowMs);
        const isSame = (Object.keys(after) as (keyof ReadTest)[]).every((key) => after[key] === before[key]);
        return testOf(isSame ? before : changeTest(tx, { siteId, userId, nowMs, action: 'update' }, before, after));
      });
    },

    remove(input) {
      const { siteId, userId, testId } = input;
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const before = testById(tx, testId);
        if (before === undefined || before.siteId !== siteId) throw new NotFoundError('There is no such test');
        checkOwn(input, before);
        if (before.deletedAtMs === null) changeTest(tx, { siteId, userId, nowMs, action: 'delete' }, before, { deletedAtMs: nowMs });
      });
    },
  };
}
