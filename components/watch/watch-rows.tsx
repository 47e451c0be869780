import { LinkText } from '../ui/link-text.tsx';
import { StateWord } from '../ui/state-word.tsx';
import { Text } from '../ui/text.tsx';
import type { BottleRow, DueLine, NutrientRow, ProbeRow } from './watch-model.ts';

export function NutrientRows({ rows }: { rows: readonly NutrientRow[] }) {
  return (
    <ul className="watch-rows">
      {rows.map((row) => (
        <li key={row.nutrient}>
          <Text bold>{row.name}</Text>
          <Text figures>{row.value}</Text>
          <span className="watch-row-word">
            <Text>{row.word}</Text>
            {row.age === '' ? null : (
              <Text variant="note" soft>
                {row.age}
              </Text>
            )}
          </span>
        </li>
      ))}
    </ul>
  );
}

export function BottleRows({ rows }: { rows: readonly BottleRow[] }) {
  return (
    <ul className="watch-rows">
      {rows.map((row) => (
        <li key={row.id}>
          <Text bold>{row.name}</Text>
          <Text figures>{row.left}</Text>
          <span className="watch-row-word">
            <Text>{row.lasts}</Text>
          </span>
        </li>
      ))}
    </ul>
  );
}

/** Each figure with its age; one that is old goes soft. */
export function ProbeRows({ rows }: { rows: readonly ProbeRow[] }) {
  return (
    <ul className="watch-rows watch-rows-short">
      {rows.map((row) => (
        <li key={row.id}>
          <span className="watch-row-name">
            <Text bold>{row.name}</Text>
            {row.isOld ? (
              <StateWord mark="unknown">{row.age === 'never heard' ? row.age : `as of ${row.age}`}</StateWord>
            ) : (
              <Text variant="note" soft>
                {row.age}
              </Text>
            )}
          </span>
          <Text figures soft={row.isOld}>
            {row.value}
          </Text>
        </li>
      ))}
    </ul>
  );
}

export function DueLines({ lines, systemId }: { lines: readonly DueLine[]; systemId: string }) {
  return (
    <ul className="watch-due" aria-label="Due">
      {lines.map((line) => (
        <li key={line.key}>
          <StateWord mark="due">Due</StateWord>
          <LinkText href={line.place === 'tests' ? `/systems/${systemId}/tests?new=1` : `/systems/${systemId}/rig`} block>
            {line.words}
          </LinkText>
        </li>
      ))}
    </ul>
  );
}
