import { cleanup, render, screen, within } from '@testing-library/react';
import { userEvent } from '@testing-library/user-event';
import { useState } from 'react';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { Button } from '../../../components/ui/button.tsx';
import { Form } from '../../../components/ui/form.tsx';
import { SegmentedControl } from '../../../components/ui/segmented-control.tsx';
import { StateWord } from '../../../components/ui/state-word.tsx';
import { Table } from '../../../components/ui/table.tsx';
import { Text } from '../../../components/ui/text.tsx';

afterEach(cleanup);

describe('a button', () => {
  it('does nothing while it is disabled or busy, and stays in the tab order', async () => {
    const pressed = vi.fn();
    const { rerender } = render(
      <Button onPress={pressed} disabled>
        Save
      </Button>,
    );
    await userEvent.tab();
    expect(screen.getByRole('button')).toHaveFocus();
    await userEvent.keyboard('{Enter}');
    rerender(
      <Button onPress={pressed} busy>
        Save
      </Button>,
    );
    await userEvent.click(screen.getByRole('button'));
    expect(pressed).not.toHaveBeenCalled();
    rerender(<Button onPress={pressed}>Save</Button>);
    await userEvent.keyboard(' ');
    expect(pressed).toHaveBeenCalledTimes(1);
  });

  it('sends its form on Enter, and not while it is busy', async () => {
    const sent = vi.fn();
    const form = (busy: boolean) => (
      <Form onSubmit={sent}>
        <input aria-label="Name" />
        <Button submit busy={busy}>
          Save
        </Button>
      </Form>
    );
    const { rerender } = render(form(false));
    await userEvent.type(screen.getByLabelText('Name'), 'x{Enter}');
    expect(sent).toHaveBeenCalledTimes(1);
    rerender(form(true));
    await userEvent.type(screen.getByLabelText('Name'), '{Enter}');
    expect(sent).toHaveBeenCalledTimes(1);
  });
});

function Presets() {
  const [value, setValue] = useState<'24h' | '7d' | '1y'>('24h');
  const options = (['24h', '7d', '1y'] as const).map((one) => ({ value: one, label: one }));
  return <SegmentedControl name="Range" value={value} onChange={setValue} options={options} />;
}

describe('a segmented control', () => {
  it('is one stop for Tab, and arrows move and choose, around the end', async () => {
    render(<Presets />);
    await userEvent.tab();
    expect(screen.getByRole('radio', { name: '24h' })).toHaveFocus();
    await userEvent.keyboard('{ArrowRight}');
    expect(screen.getByRole('radio', { name: '7d' })).toHaveFocus();
    expect(screen.getByRole('radio', { name: '7d' })).toBeChecked();
    await userEvent.keyboard('{End}{ArrowRight}');
    expect(screen.getByRole('radio', { name: '24h' })).toBeChecked();
    await userEvent.tab();
    expect(document.body).toHaveFocus();
  });
});

describe('a table', () => {
  const rows = [
    { id: 'a', name: 'Lobby', ml: 10 },
    { id: 'b', name: 'Frag shelf', ml: 9 },
  ];
  const columns = [
    { key: 'name', title: 'System', cell: (row: (typeof rows)[number]) => row.name, sortBy: (row: (typeof rows)[number]) => row.name },
    { key: 'ml', title: 'mL', numeric: true, cell: (row: (typeof rows)[number]) => row.ml, sortBy: (row: (typeof rows)[number]) => row.ml },
  ];
  const firstCells = () =>
    screen
      .getAllByRole('row')
      .slice(1)
      .map((row) => within(row).getAllByRole('cell')[0]?.textContent);

  it('keeps the order it was given until a column sorts it, by number and both ways', async () => {
    render(<Table caption="Today" columns={columns} rows={rows} rowKey={(row) => row.id} />);
    expect(screen.getByRole('table', { name: 'Today' })).toBeInTheDocument();
    expect(firstCells()).toEqual(['Lobby', 'Frag shelf']);
    await userEvent.click(screen.getByRole('button', { name: 'mL' }));
    expect(firstCells()).toEqual(['Frag shelf', 'Lobby']);
    expect(screen.getByRole('columnheader', { name: 'mL' })).toHaveAttribute('aria-sort', 'ascending');
    await userEvent.click(screen.getByRole('button', { name: 'mL' }));
    expect(firstCells()).toEqual(['Lobby', 'Frag shelf']);
  });

  it('opens a row by its button, once', async () => {
    const opened = vi.fn();
    render(
      <Table
        caption="Today"
        columns={columns}
        rows={rows}
        rowKey={(row) => row.id}
        onOpen={opened}
        openName={(row) => `Open ${row.name}`}
      />,
    );
    await userEvent.click(screen.getByRole('button', { name: 'Open Lobby' }));
    expect(opened.mock.calls).toEqual([[rows[0]]]);
  });
});

describe('words', () => {
  it('say a state beside its shape', () => {
    const { container } = render(<StateWord mark="unknown">unheard</StateWord>);
    expect(container.querySelector('svg')).toHaveAttribute('aria-hidden', 'true');
    expect(screen.getByText('unheard')).toBeInTheDocument();
  });

  it('stand on a line of their own, unless they are part of a text', () => {
    render(
      <Text>
        Nitrate <Text bold>12</Text>
      </Text>,
    );
    expect(getComputedStyle(screen.getByText(/Nitrate/)).display).toBe('block');
    expect(getComputedStyle(screen.getByText('12')).display).toBe('inline');
  });
});
