import { cleanup, render, screen } from '@testing-library/react';
import { userEvent } from '@testing-library/user-event';
import { useState } from 'react';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { Button } from '../../../components/ui/button.tsx';
import { Sheet } from '../../../components/ui/sheet.tsx';

// jsdom knows no modal dialogs; what the browser adds (inertness, Escape, the focus trap) is checked by the journeys.
const dialog = HTMLDialogElement.prototype;
beforeEach(() => {
  dialog.showModal = function showModal(this: HTMLDialogElement) {
    this.open = true;
    this.querySelector('button')?.focus();
  };
  dialog.close = function close(this: HTMLDialogElement) {
    this.open = false;
  };
});
afterEach(cleanup);

function Page() {
  const [open, setOpen] = useState(false);
  return (
    <>
      <Button onPress={() => setOpen(true)}>Write down a test</Button>
      <Sheet title="New test" open={open} onClose={() => setOpen(false)}>
        <p>Fields</p>
      </Sheet>
    </>
  );
}

describe('a sheet', () => {
  it('is a named dialog that takes the focus, and gives it back when it closes', async () => {
    render(<Page />);
    const opener = screen.getByRole('button', { name: 'Write down a test' });
    await userEvent.click(opener);
    expect(screen.getByRole('dialog', { name: 'New test' })).toContainElement(document.activeElement as HTMLElement);
    await userEvent.click(screen.getByRole('button', { name: 'Close' }));
    expect(screen.queryByRole('dialog')).not.toBeInTheDocument();
    expect(opener).toHaveFocus();
  });

  it('closes when the browser cancels it, as on Escape', async () => {
    render(<Page />);
    await userEvent.click(screen.getByRole('button', { name: 'Write down a test' }));
    const event = new Event('cancel', { cancelable: true });
    screen.getByRole('dialog').dispatchEvent(event);
    expect(event.defaultPrevented).toBe(true);
    await expect.poll(() => screen.queryByRole('dialog')).toBeNull();
  });

  it('closes on a press beside it, and not on one inside', async () => {
    render(<Page />);
    await userEvent.click(screen.getByRole('button', { name: 'Write down a test' }));
    await userEvent.click(screen.getByText('Fields'));
    expect(screen.getByRole('dialog')).toBeInTheDocument();
    await userEvent.click(screen.getByRole('dialog'));
    expect(screen.queryByRole('dialog')).not.toBeInTheDocument();
  });
});
