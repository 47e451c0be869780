import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { cleanup, fireEvent, render, screen } from '@testing-library/react';
import { afterEach, beforeEach, expect, it, vi } from 'vitest';
import { LogTests } from '../../../components/tests/log-tests.tsx';
import { session } from '../../../lib/session.ts';
import { testId } from '../../helpers/client-fixtures.ts';

const asked = vi.fn<(address: string, init: RequestInit) => Promise<Response>>();
const onDone = vi.fn<(sentence: string) => void>();
const quantities = () => asked.mock.calls.flatMap(([, init]) => (typeof init.body === 'string' ? [init.body] : []));

beforeEach(() => {
  asked.mockReset();
  onDone.mockReset();
  vi.stubGlobal('fetch', asked);
  session.accept({ accessToken: 'token', expiresIn: 900, user: { id: testId(1000), email: 'o@ternlane.example', name: 'Owner' } });
  render(
    <QueryClientProvider client={new QueryClient()}>
      <LogTests systemId={testId(1)} timeZone="Europe/Lisbon" tests={[]} onDone={onDone} />
    </QueryClientProvider>,
  );
});
afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
});

const fill = (nutrient: string, text: string) =>
  fireEvent.change(screen.getByRole('textbox', { name: nutrient }), { target: { value: text } });
const save = () => fireEvent.click(screen.getByRole('button', { name: 'Save' }));

it('sends neither result while one of them cannot be read', async () => {
  fill('Nitrate', '12');
  fill('Phosphate', '900');
  save();
  await screen.findByText(/cannot be real/);
  expect(asked).not.toHaveBeenCalled();
});

it('says what is saved when the other one fails, and does not send it again', async () => {
  const written = { id: testId(2), systemId: testId(1), at: '2026-03-08T14:00:00Z', quantity: 'nitrate', value: 12, unit: 'mg/L NO3' };
  const test = { ...written, below: false, canonicalMgPerL: 12, note: '', by: 'Owner', byId: testId(1000), edited: false };
  const problem = { type: 'about:blank', title: 'Refused', status: 403, detail: 'Not yours' };
  const sayNo = () => Response.json(problem, { status: 403, headers: { 'content-type': 'application/problem+json' } });
  asked.mockImplementation((_, init) =>
    Promise.resolve(String(init.body).includes('"nitrate"') ? Response.json(test, { status: 201 }) : sayNo()),
  );
  fill('Nitrate', '12');
  fill('Phosphate', '0.05');
  save();
  await screen.findByText('Nitrate is saved.');
  expect(screen.queryByRole('textbox', { name: 'Nitrate' })).not.toBeInTheDocument();
  expect(screen.getByRole('textbox', { name: 'Phosphate' })).toHaveValue('0.05');
  await vi.waitFor(() => expect(quantities()).toHaveLength(2));

  asked.mockImplementation(() =>
    Promise.resolve(
      Response.json({ ...test, quantity: 'phosphate', unit: 'mg/L PO4', value: 0.05, canonicalMgPerL: 0.05 }, { status: 201 }),
    ),
  );
  save();
  await vi.waitFor(() => expect(onDone).toHaveBeenCalledWith('Written down: nitrate above, phosphate in band.'));
  expect(quantities().filter((body) => body.includes('"nitrate"'))).toHaveLength(1);
});
