import { cleanup, render, screen } from '@testing-library/react';
import { userEvent } from '@testing-library/user-event';
import { useState } from 'react';
import { afterEach, describe, expect, it } from 'vitest';
import { DecimalField } from '../../../components/ui/decimal-field.tsx';
import { Field } from '../../../components/ui/field.tsx';
import { Stepper } from '../../../components/ui/stepper.tsx';

afterEach(cleanup);

function Nitrate({ error }: { error?: string }) {
  const [text, setText] = useState('');
  return <DecimalField label="Nitrate" unit="mg/L" text={text} onChange={setText} error={error} />;
}

describe('a field for a number', () => {
  it('opens the keypad with a decimal key, under its label', () => {
    render(<Nitrate />);
    expect(screen.getByLabelText('Nitrate')).toHaveAttribute('inputmode', 'decimal');
  });

  it('says back what it read, with the unit, for a comma and for a point', async () => {
    render(<Nitrate />);
    const field = screen.getByLabelText('Nitrate');
    await userEvent.type(field, '0,08');
    expect(field).toHaveAccessibleDescription('Read as 0.08 mg/L');
    await userEvent.clear(field);
    await userEvent.type(field, '0.08');
    expect(field).toHaveAccessibleDescription('Read as 0.08 mg/L');
    expect(field).toHaveValue('0.08');
  });

  it('says in words what it cannot read, once it is left, and keeps what was typed', async () => {
    render(<Nitrate />);
    const field = screen.getByLabelText('Nitrate');
    await userEvent.type(field, '1,234');
    expect(field).not.toHaveAttribute('aria-invalid');
    await userEvent.tab();
    expect(field).toHaveAttribute('aria-invalid', 'true');
    expect(field).toHaveAccessibleDescription(/"1,234" can be read in two ways/);
    expect(field).toHaveValue('1,234');
  });

  it('is not wrong for being empty, and shows the error of the server first', async () => {
    const { rerender } = render(<Nitrate />);
    await userEvent.click(screen.getByLabelText('Nitrate'));
    await userEvent.tab();
    expect(screen.getByLabelText('Nitrate')).not.toHaveAttribute('aria-invalid');
    rerender(<Nitrate error="A result cannot be negative" />);
    expect(screen.getByLabelText('Nitrate')).toHaveAccessibleDescription('A result cannot be negative');
  });
});

function Phosphate() {
  const [text, setText] = useState('');
  return <Stepper label="Phosphate" unit="mg/L" text={text} onChange={setText} step={0.01} decimals={2} startAt={0.04} />;
}

describe('a stepper', () => {
  it('starts from the last value, steps, and never goes under its least', async () => {
    render(<Phosphate />);
    const field = screen.getByLabelText('Phosphate');
    await userEvent.click(screen.getByRole('button', { name: 'Phosphate: more' }));
    expect(field).toHaveValue('0.04');
    await userEvent.click(screen.getByRole('button', { name: 'Phosphate: more' }));
    expect(field).toHaveValue('0.05');
    for (let press = 0; press < 8; press += 1) await userEvent.click(screen.getByRole('button', { name: 'Phosphate: less' }));
    expect(field).toHaveValue('0.00');
  });

  it('steps on from what was typed with a comma', async () => {
    render(<Phosphate />);
    await userEvent.type(screen.getByLabelText('Phosphate'), '0,1');
    await userEvent.click(screen.getByRole('button', { name: 'Phosphate: less' }));
    expect(screen.getByLabelText('Phosphate')).toHaveValue('0.09');
  });
});

describe('a text field', () => {
  it('ties hint and error to the field', () => {
    render(<Field label="Name" value="" onChange={() => undefined} hint="As others see it" error="Give a name" />);
    expect(screen.getByLabelText('Name')).toHaveAccessibleDescription('As others see it Give a name');
    expect(screen.getByLabelText('Name')).toHaveAttribute('aria-invalid', 'true');
  });
});
