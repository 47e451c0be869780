import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Journey, startJourney } from '../helpers/journey.ts';

let journey: Journey;

beforeAll(async () => {
  journey = await startJourney();
});

afterAll(() => journey.close());

describe.each(['phone', 'wide'] as const)('setting an overdose limit, %s', (width) => {
  it('stops a pump that overruns it; a sitter acknowledges and cannot reset; the owner resets', async () => {
    const equipped = await journey.equip();
    const { systemId, headId, owner } = equipped;
    const schedule = { heads: [{ headId, mlPerDay: 6, slots: 12 }] };
    await owner.api('putSchedule', { params: { systemId }, body: schedule });
    const pump = journey.startDevice(equipped.pump, 'pump');

    // The keeper sets a limit of their own.
    const keeper = await journey.signedIn(equipped, 'keeper', width);
    await keeper.page.goto(`/systems/${systemId}/alarms`);
    await keeper.page.getByRole('tab', { name: 'Limits' }).click();
    await keeper.page.getByRole('button', { name: 'Change: Too much carbon in an hour' }).click();
    const editor = keeper.page.getByRole('dialog', { name: 'Too much carbon in an hour' });
    await editor.getByRole('radio', { name: /Numbers of my own/ }).check();
    await editor.getByRole('textbox', { name: 'Soft limit' }).fill('2');
    await editor.getByRole('textbox', { name: 'Hard limit' }).fill('1');
    await editor.getByRole('button', { name: 'Save' }).click();
    await editor.getByText('The soft limit must be under the hard limit').waitFor();
    await keeper.expectAccessible();
    await editor.getByRole('textbox', { name: 'Soft limit' }).fill('0,6');
    await editor.getByRole('button', { name: 'Save' }).click();
    await editor.waitFor({ state: 'detached' });
    await keeper.page.getByText('soft 0.60 mL, hard 1.0 mL, set by hand').waitFor();
    await keeper.expectAccessible();

    // The pump runs the schedule, and then somebody presses its button.
    await keeper.page.goto(`/systems/${systemId}/rig`);
    await keeper.page.getByText('The pump runs this schedule.').waitFor();
    // Two presses: each within what the pump itself allows for a run, both together over the limit.
    const runs = async () => (await owner.api('listRuns', { params: { systemId } })).items;
    pump.type('dose 0.6');
    await expect.poll(async () => (await runs()).filter((run) => run.endedAt !== null).length, { timeout: 10_000 }).toBe(1);
    pump.type('dose 0.6');

    const sitter = await journey.signedIn(equipped, 'sitter', width);
    await sitter.page.goto(`/systems/${systemId}/alarms`);
    await sitter.page.getByRole('link', { name: /within an hour, over the hard limit of 1.0 mL/ }).waitFor();
    await sitter.expectAccessible();
    await expect
      .poll(async () => (await owner.api('listHeads', { params: { systemId } })).items[0]?.stop?.cause, { timeout: 10_000 })
      .toBe('interlock');
    await expect
      .poll(
        async () =>
          (await owner.api('listDevices', { params: { systemId } })).items.find((device) => device.kind === 'pump')?.state?.heads[0]?.state,
        {
          timeout: 10_000,
        },
      )
      .toBe('stopped');

    // The sitter sees it, is on it, and cannot reset it.
    await sitter.page.getByRole('link', { name: /within an hour, over the hard limit of 1.0 mL/ }).click();
    await sitter.page.getByText('Nobody has seen this yet').waitFor();
    await sitter.page.getByText('Dry your hands before you touch anything electric.').waitFor();
    await sitter.expectAccessible();
    await sitter.page.getByRole('button', { name: 'Acknowledge' }).click();
    await sitter.page.getByRole('button', { name: 'Acknowledge' }).waitFor({ state: 'detached' });
    expect(await sitter.page.getByRole('button', { name: 'Reset' }).count()).toBe(0);
    await sitter.page.getByRole('button', { name: 'I am on it' }).click();
    await sitter.page.getByRole('button', { name: 'Tell the others' }).click();
    await sitter.page.getByText(/sitter is on it/).waitFor();
    const alarms = await owner.api('listSystemAlarms', { params: { systemId } });
    const latched = alarms.items.filter((alarm) => alarm.latched);
    expect(latched.map((alarm) => alarm.code)).toContain('volume-hour');

    // The owner resets every latch with its cause; nothing starts by that.
    const ownerPage = await journey.signedIn(equipped, 'owner', width);
    for (const alarm of latched) {
      await ownerPage.page.goto(`/systems/${systemId}/alarms/${alarm.id}`);
      await ownerPage.page.getByRole('button', { name: 'Reset', exact: true }).click();
      await ownerPage.page.getByLabel('What was the cause?').fill('The button was pressed twice');
      await ownerPage.expectAccessible();
      await ownerPage.page.getByRole('button', { name: 'Reset the alarm' }).click();
      await ownerPage.page.getByRole('button', { name: 'Reset the alarm' }).waitFor({ state: 'detached' });
    }
    await expect
      .poll(async () => (await owner.api('listSystemAlarms', { params: { systemId } })).items.filter((alarm) => alarm.latched))
      .toEqual([]);
    expect((await owner.api('listHeads', { params: { systemId } })).items[0]?.stop?.cause).toBe('interlock');

    // Resuming is apart, and the pump says that it did.
    await ownerPage.page.goto(`/systems/${systemId}`);
    await ownerPage.page.getByRole('button', { name: 'Resume' }).click();
    await ownerPage.page.getByRole('region', { name: 'Resume dosing' }).getByRole('button', { name: 'Resume' }).click();
    await ownerPage.page.getByText(/Doses again from its next portion/).waitFor();
    await ownerPage.expectAccessible();
    for (const somebody of [keeper, sitter, ownerPage]) {
      somebody.expectClean();
      await somebody.close();
    }
    await pump.close();
  });
});
