import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { comingMinutesUtc, type Journey, startJourney } from '../helpers/journey.ts';

/** Of 2 mL, so that one runs for almost two seconds. */
const portions = 4;
const portionMl = 2;
/** A portion that a pump process reported is on the tape within this, without a reload. */
const onTapeMs = 2_000;

let journey: Journey;
let stateFolder: string;

beforeAll(async () => {
  journey = await startJourney();
  stateFolder = mkdtempSync(path.join(tmpdir(), 'steadfall-pump-'));
});

afterAll(async () => {
  await journey.close();
  rmSync(stateFolder, { recursive: true, force: true });
});

describe('watching live dosing, phone and wide at once', () => {
  it('shows each portion as the pump reports it, and says when the pump goes away and comes back', async () => {
    const equipped = await journey.equip();
    const { systemId, headId, owner } = equipped;
    // A portion in each of the coming minutes.
    const entry = { headId, mlPerDay: portions * portionMl, slotsUtcMin: comingMinutesUtc(portions) };
    await owner.api('putSchedule', { params: { systemId }, body: { heads: [entry] } });
    const first = journey.startDevice(equipped.pump, 'pump', stateFolder);

    const watchers = await Promise.all((['phone', 'wide'] as const).map((width) => journey.signedIn(equipped, 'viewer', width)));
    const bothSay = (text: RegExp, timeout: number) =>
      Promise.all(watchers.map(({ page }) => page.getByText(text).first().waitFor({ timeout })));
    const endedRuns = async () =>
      (await owner.api('listRuns', { params: { systemId } })).items.filter((run) => run.cause === 'schedule' && run.endedAt !== null)
        .length;
    for (const { page } of watchers) {
      await page.goto(`/systems/${systemId}`);
      await page.getByRole('heading', { name: 'Carbon today' }).waitFor();
      await page.getByText(`0 of ${portions} portions given`).waitFor();
    }

    await expect.poll(endedRuns, { timeout: 75_000, interval: 50 }).toBe(1);
    await bothSay(new RegExp(`^1 of ${portions} portions given`), onTapeMs);
    await bothSay(/^\d\.\d of 8\.0 mL/, onTapeMs);
    for (const watcher of watchers) await watcher.expectAccessible();

    // The plug is pulled in the middle of the next portion: its last will says so, and the portion is neither given nor missed.
    const isRunning = async () =>
      (await owner.api('listRuns', { params: { systemId } })).items.some((run) => run.endedAt === null && run.ml > 0);
    await expect.poll(isRunning, { timeout: 75_000, interval: 50 }).toBe(true);
    await first.kill();
    await bothSay(/One device is not heard/, 10_000);
    await bothSay(new RegExp(`^1 of ${portions} portions given, 1 unheard`), 10_000);
    for (const watcher of watchers) await watcher.expectAccessible();

    // Back with its memory, it tells how far the portion got, and goes on with what is due.
    journey.startDevice(equipped.pump, 'pump', stateFolder);
    await bothSay(new RegExp(`^1 of ${portions} portions given, 1 in part`), 30_000);
    const before = await endedRuns();
    await expect.poll(endedRuns, { timeout: 75_000, interval: 50 }).toBe(before + 1);
    await bothSay(new RegExp(`^2 of ${portions} portions given, 1 in part`), onTapeMs);
    for (const { page } of watchers) expect(await page.getByText(/is not heard/).count()).toBe(0);
    for (const watcher of watchers) {
      watcher.expectClean();
      await watcher.close();
    }
  }, 420_000);
});
