import type { System } from '#shared/contract/systems.ts';
import type { Run } from '#shared/contract/telemetry.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatClockWithSeconds, formatNear } from '../../lib/format/time.ts';
import type { TapeItem } from '../charts/drop-tape-model.ts';
import { kindWords } from '../charts/drop-tape-words.ts';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { Facts, type Fact } from './facts.tsx';
import { causeWords, portionAdvice } from './portion-words.ts';

export interface PortionSheetProps {
  item: TapeItem;
  run: Run | null;
  system: System;
  nowMs: number;
  headName: string;
  onClose: () => void;
}

/** One portion: what was planned, and what the pump said of it. */
export function PortionSheet({ item, run, system, nowMs, headName, onClose }: PortionSheetProps) {
  const zone = system.timeZone;
  const facts: Fact[] = [
    { name: item.plannedMl > 0 ? 'Due' : 'At', value: formatNear(item.tMs, zone, nowMs) },
    { name: 'Planned', value: item.plannedMl > 0 ? formatMl(item.plannedMl) : 'by no slot' },
    { name: 'Given', value: item.kind === 'unheard' ? 'not known yet' : formatMl(item.givenMl) },
    { name: 'By', value: item.kind === 'hand' ? 'a person' : headName },
    ...(run === null
      ? []
      : [
          { name: 'The pump began', value: formatClockWithSeconds(run.beganAt, zone) },
          { name: 'The pump ended', value: run.endedAt === null ? 'not yet' : formatClockWithSeconds(run.endedAt, zone) },
          { name: 'Why it ran', value: causeWords[run.cause] },
        ]),
  ];
  const advice = portionAdvice(item.kind);
  return (
    <Sheet title={`Portion, ${kindWords[item.kind]}`} open onClose={onClose}>
      {advice === null ? null : <Text>{advice}</Text>}
      <Facts facts={facts} />
    </Sheet>
  );
}
