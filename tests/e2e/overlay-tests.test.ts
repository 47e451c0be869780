import { DateTime } from 'luxon';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Journey, startJourney } from '../helpers/journey.ts';

const zone = 'Europe/Lisbon';
let journey: Journey;

beforeAll(async () => {
  journey = await startJourney();
});

afterAll(() => journey.close());

describe.each(['phone', 'wide'] as const)('laying tests over telemetry, %s', (width) => {
  it('shows both tests in their lanes at their time with the band, reads the crosshair, and takes a correction', async () => {
    const equipped = await journey.equip();
    const { systemId } = equipped;
    const probe = journey.startDevice(equipped.probe, 'probe');
    const keeper = await journey.signedIn(equipped, 'keeper', width);
    const { page } = keeper;
    const testedAt = DateTime.now().setZone(zone).minus({ days: 1 }).set({ hour: 18, minute: 30, second: 0, millisecond: 0 });

    // Both nutrients in one sheet.
    await page.goto(`/systems/${systemId}/tests`);
    await page.getByText('No test yet.', { exact: false }).waitFor();
    await keeper.expectAccessible();
    await page.getByRole('button', { name: 'Write down a test' }).click();
    const sheet = page.getByRole('dialog', { name: 'Write down a test' });
    await sheet.getByLabel('Nitrate', { exact: true }).fill('12');
    await sheet.getByLabel('Phosphate', { exact: true }).fill('0,08');
    await sheet.getByRole('button', { name: 'Tested now; change the time' }).click();
    await sheet.getByLabel('Tested at').fill(testedAt.toFormat("yyyy-MM-dd'T'HH:mm"));
    await keeper.expectAccessible();
    await sheet.getByRole('button', { name: 'Save' }).click();
    await page.getByText('Written down: nitrate above, phosphate in band.').waitFor();

    // In the right lanes, at the right time, with the band.
    await page.goto(`/systems/${systemId}/overlay`);
    await page.getByRole('radio', { name: '3 d' }).click();
    const nitrate = page.getByRole('region', { name: 'Nitrate, mg/L' });
    const phosphate = page.getByRole('region', { name: 'Phosphate, mg/L' });
    const day = testedAt.toFormat('d LLLL');
    await nitrate.getByRole('img', { name: new RegExp(`one test, 12(\\.0)? on ${day}.*aim 3 to 10`) }).waitFor();
    await phosphate.getByRole('img', { name: new RegExp(`one test, 0\\.08 on ${day}.*aim 0\\.03 to 0\\.10`) }).waitFor();
    await nitrate.getByText('aim 3 to 10').waitFor();
    await page.getByRole('region', { name: /^Temperature/ }).waitFor();
    await keeper.expectAccessible();

    // The mark is where the crosshair says that the test was.
    const mark = nitrate.locator('svg circle[r="4"]');
    await mark.scrollIntoViewIfNeeded();
    const box = await mark.boundingBox();
    if (box === null) throw new Error('The mark of the nitrate test is not drawn');
    await page.mouse.click(box.x + box.width / 2, box.y + box.height / 2);
    const readout = page.getByRole('region', { name: 'At the crosshair' });
    await readout.getByText(testedAt.toFormat('d LLL, HH:mm')).first().waitFor();
    const crosshairWords = await readout.getByText(/^\w+ \d+ \w+ \d{4}, \d\d:\d\d$/).innerText();
    const crosshair = DateTime.fromFormat(crosshairWords, 'cccc d LLLL yyyy, HH:mm', { zone });
    // Within two pixels of three days.
    const pixelMinutes = (3 * 24 * 60) / (width === 'phone' ? 280 : 800);
    expect(Math.abs(crosshair.diff(testedAt, 'minutes').minutes)).toBeLessThan(2 * pixelMinutes);

    // The keyboard moves the crosshair and reads every lane.
    const slider = page.getByRole('slider', { name: 'Time of the crosshair' });
    await slider.focus();
    const spoken = await slider.getAttribute('aria-valuetext');
    await page.keyboard.press('ArrowRight');
    await expect.poll(() => slider.getAttribute('aria-valuetext')).not.toBe(spoken);
    await page.keyboard.press('ArrowLeft');
    await expect.poll(() => slider.getAttribute('aria-valuetext')).toMatch(/Nitrate.*Phosphate/);
    await keeper.expectAccessible();

    // A correction is seen at once, with its ring.
    await readout.getByRole('button', { name: 'Edit this nitrate test' }).click();
    const editor = page.getByRole('dialog');
    await editor.getByLabel('Nitrate', { exact: true }).fill('11');
    await editor.getByRole('button', { name: 'Save' }).click();
    await nitrate.getByRole('img', { name: new RegExp(`one test, 11(\\.0)? on ${day}`) }).waitFor();
    await nitrate.locator('svg circle[r="8.5"]').waitFor();

    // The same numbers stand in the table twin.
    await nitrate.getByRole('button', { name: 'Show as table: Nitrate' }).click();
    await nitrate.getByRole('cell', { name: 'edited' }).waitFor();
    await keeper.expectAccessible();
    keeper.expectClean();
    await keeper.close();
    await probe.close();
  });
});
