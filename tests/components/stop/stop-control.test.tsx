import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { act, cleanup, fireEvent, render, screen } from '@testing-library/react';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { Head } from '#shared/contract/rig.ts';
import type { System } from '#shared/contract/systems.ts';
import { StopControl } from '../../../components/stop/stop-control.tsx';
import { keys } from '../../../hooks/keys.ts';
import { session } from '../../../lib/session.ts';
import { makeDevice, makeHead, makeStatus, makeSystem, testId } from '../../helpers/client-fixtures.ts';

vi.mock('expo-router', () => ({ Link: ({ children }: { children: unknown }) => children }));

const system = makeSystem();
const asked = vi.fn<(address: string, init: RequestInit) => Promise<Response>>();
const stops = () => asked.mock.calls.filter(([address]) => address.endsWith('/stop'));
let answerStop: () => Response;

function answer(address: string): Response {
  if (address.endsWith('/stop')) return answerStop();
  if (address.endsWith('/heads')) return Response.json({ items: [makeHead()], next: null });
  if (address.endsWith('/devices')) return Response.json({ items: [makeDevice()], next: null });
  return Response.json({ items: [], next: null });
}

const outcome = (text: 'done' | 'no-answer') =>
  Response.json({
    orders: [
      { id: testId(60), deviceId: testId(40), head: 1, outcome: text, why: null, at: text === 'done' ? '2026-03-08T14:02:07Z' : null },
    ],
  });

function show(shown: System, first: Head): void {
  const client = new QueryClient({ defaultOptions: { queries: { staleTime: Infinity } } });
  client.setQueryData(keys.heads(shown.id), { items: [first, makeHead({ id: testId(51), head: 2, kind: 'other' })], next: null });
  client.setQueryData(keys.devices(shown.id), { items: [makeDevice()], next: null });
  render(
    <QueryClientProvider client={client}>
      <StopControl system={shown} />
    </QueryClientProvider>,
  );
}

beforeEach(() => {
  vi.useFakeTimers();
  answerStop = () => outcome('done');
  asked.mockReset();
  asked.mockImplementation((address) => Promise.resolve(answer(address)));
  vi.stubGlobal('fetch', asked);
  session.accept({ accessToken: 'token', expiresIn: 900, user: { id: testId(1000), email: 'o@ternlane.example', name: 'Owner' } });
  show(system, makeHead());
});
afterEach(() => {
  cleanup();
  vi.useRealTimers();
  vi.unstubAllGlobals();
});

const button = () => screen.getByRole('button', { name: 'Stop dosing' });
const wait = (ms: number) => act(() => vi.advanceTimersByTimeAsync(ms));
const down = () => fireEvent.pointerDown(button(), { button: 0, clientX: 100, clientY: 20 });
const release = () => {
  fireEvent.pointerUp(button());
  fireEvent.click(button());
};

describe('stop by holding', () => {
  it('asks the pump after one second, once, and says what it answered', async () => {
    down();
    await wait(999);
    expect(stops()).toHaveLength(0);
    await wait(1);
    release();
    await wait(100);
    expect(stops()).toHaveLength(1);
    expect(screen.getByRole('alert')).toHaveTextContent('Doser, head 1Stopped at the pump, 14:02:07');
  });

  it('allows a finger to drift by 24 px', async () => {
    down();
    fireEvent.pointerMove(button(), { clientX: 100, clientY: 44 });
    await wait(1000);
    expect(stops()).toHaveLength(1);
  });

  it('is cancelled, visibly, by drifting farther', async () => {
    down();
    fireEvent.pointerMove(button(), { clientX: 126, clientY: 20 });
    await wait(2000);
    release();
    expect(stops()).toHaveLength(0);
    expect(button()).toHaveTextContent('nothing was stopped');
    expect(screen.queryByRole('button', { name: 'Stop now' })).not.toBeInTheDocument();
  });
});

describe('stop by pressing', () => {
  it('lists the carbon heads that it stops, and stops them by a second press', async () => {
    down();
    await wait(200);
    release();
    expect(screen.getByText('Doser, head 1')).toBeInTheDocument();
    expect(screen.queryByText('Doser, head 2')).not.toBeInTheDocument();
    expect(stops()).toHaveLength(0);
    fireEvent.click(screen.getByRole('button', { name: 'Stop now' }));
    await wait(100);
    expect(stops()).toHaveLength(1);
  });

  it('works by keyboard, with the focus on "Stop now"', () => {
    fireEvent.click(button());
    expect(screen.getByRole('button', { name: 'Stop now' })).toHaveFocus();
  });

  it('offers "Stop now" for ten seconds', async () => {
    fireEvent.click(button());
    await wait(9_999);
    expect(screen.getByRole('button', { name: 'Stop now' })).toBeInTheDocument();
    await wait(1);
    expect(screen.queryByRole('button', { name: 'Stop now' })).not.toBeInTheDocument();
    expect(stops()).toHaveLength(0);
  });
});

describe('what it says', () => {
  const stopNow = async () => {
    fireEvent.click(button());
    fireEvent.click(screen.getByRole('button', { name: 'Stop now' }));
    await wait(100);
  };

  it('never claims a stop that the pump did not confirm', async () => {
    answerStop = () => outcome('no-answer');
    await stopNow();
    expect(screen.getByRole('alert')).toHaveTextContent("No answer. Pull the pump's plug; dry hands first.");
    fireEvent.click(screen.getByRole('button', { name: 'Ask again' }));
    await wait(100);
    expect(stops()).toHaveLength(2);
  });

  it('says to pull the plug when the server cannot be asked', async () => {
    answerStop = () => {
      throw new TypeError('Failed to fetch');
    };
    await stopNow();
    expect(screen.getByRole('alert')).toHaveTextContent(/No connection to Steadfall.*Pull the pump's plug/);
  });
});

describe('while dosing is stopped', () => {
  const stopped = (confirmedAt: string | null) =>
    makeHead({ stop: { cause: 'person', alarmId: null, at: '2026-03-08T14:02:00Z', confirmedAt } });
  const again = (shown: System, head: Head) => {
    cleanup();
    show(shown, head);
  };
  const resume = () => screen.queryByRole('button', { name: 'Resume' });

  it('stays in reach, and the pump that confirmed lets a keeper resume', async () => {
    again(system, stopped('2026-03-08T14:02:07Z'));
    expect(screen.getByRole('status')).toHaveTextContent(/^Stopped at the pump, /);
    expect(resume()).toBeInTheDocument();
    fireEvent.click(button());
    fireEvent.click(screen.getByRole('button', { name: 'Stop now' }));
    await wait(100);
    expect(stops()).toHaveLength(1);
  });

  it('offers no resume, and says no stop, before the pump has answered', () => {
    again(system, stopped(null));
    expect(screen.getByRole('status')).toHaveTextContent(/^Asked at .*, no answer yet\. Pull the pump's plug; dry hands first\.$/);
    expect(resume()).not.toBeInTheDocument();
    expect(button()).toBeInTheDocument();
  });

  it('leads to the alarms while one of them holds it', () => {
    again(makeSystem({ status: makeStatus({ latched: true }) }), stopped('2026-03-08T14:02:07Z'));
    expect(screen.getByText('To the alarms')).toBeInTheDocument();
    expect(resume()).not.toBeInTheDocument();
  });

  it('offers no resume to a sitter', () => {
    again(makeSystem({ role: 'sitter' }), stopped('2026-03-08T14:02:07Z'));
    expect(screen.getByText('A keeper or the owner resumes.')).toBeInTheDocument();
    expect(resume()).not.toBeInTheDocument();
  });
});
