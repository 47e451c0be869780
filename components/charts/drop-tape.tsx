import { useEffect, useId, useMemo, useRef, useState } from 'react';
import Svg, { G } from 'react-native-svg';
import type { Tape } from '#shared/contract/telemetry.ts';
import { useReducedMotion } from '../../hooks/use-media.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatClock } from '../../lib/format/time.ts';
import { Button } from '../ui/button.tsx';
import { Table } from '../ui/table.tsx';
import { Text } from '../ui/text.tsx';
import './charts.css';
import { itemAt, tapeItems, tapeModel, type TapeItem, type TapeKind } from './drop-tape-model.ts';
import { kindWords, itemWords, tapeSentence } from './drop-tape-words.ts';
import { DropMark } from './svg/drop-mark.tsx';
import { TapeHours, TapeLineSvg } from './svg/tape-line-svg.tsx';
import { useElementWidth } from './use-element-width.ts';

export interface DropTapeProps {
  tape: Tape;
  zone: string;
  nowMs: number;
  /** What a head is called, where there is more than one. */
  headName: (deviceId: string | null, head: number | null) => string;
  /** A portion was pressed, on the tape or in its table. */
  onOpen?: (item: TapeItem) => void;
}

/** Marks that need a word; an empty and a full drop explain each other. */
const keyOrder: readonly TapeKind[] = ['running', 'partial', 'unheard', 'missed', 'held', 'interlocked', 'hand', 'unplanned'];

function TapeKey({ kinds }: { kinds: readonly TapeKind[] }) {
  return (
    <ul className="tape-key">
      {kinds.map((kind) => (
        <li key={kind}>
          <Svg width={14} height={18} viewBox="0 0 14 20" aria-hidden>
            <G>
              <DropMark kind={kind} isStill />
            </G>
          </Svg>
          <Text variant="note">{kindWords[kind]}</Text>
        </li>
      ))}
    </ul>
  );
}

function TapeTable({
  items,
  zone,
  headName,
  onOpen,
}: Pick<DropTapeProps, 'zone' | 'headName' | 'onOpen'> & { items: readonly TapeItem[] }) {
  const hasHeads = new Set(items.filter((item) => item.head !== null).map((item) => `${item.deviceId ?? ''} ${item.head}`)).size > 1;
  return (
    <Table
      caption="Portions of today"
      columns={[
        { key: 'when', title: 'Due', cell: (item: TapeItem) => formatClock(item.tMs, zone) },
        ...(hasHeads
          ? [
              {
                key: 'head',
                title: 'Head',
                cell: (item: TapeItem) => (item.head === null ? 'by hand' : headName(item.deviceId, item.head)),
              },
            ]
          : []),
        {
          key: 'planned',
          title: 'Planned',
          numeric: true,
          cell: (item: TapeItem) => (item.plannedMl === 0 ? 'no' : formatMl(item.plannedMl)),
        },
        { key: 'given', title: 'Given', numeric: true, cell: (item: TapeItem) => formatMl(item.givenMl) },
        { key: 'what', title: 'What', cell: (item: TapeItem) => kindWords[item.kind] },
      ]}
      rows={items}
      rowKey={(item) => item.key}
      onOpen={onOpen}
      openName={(item) => `Open ${itemWords(item, zone)}`}
    />
  );
}

/** A day's portions as a strip: planned, given, and everything that differs, each a shape of its own. */
export function DropTape({ tape, zone, nowMs, headName, onOpen }: DropTapeProps) {
  const scroller = useRef<HTMLDivElement>(null);
  const { widthPx, remPx } = useElementWidth(scroller);
  const isStill = useReducedMotion();
  const tableId = useId();
  const [isTableShown, setIsTableShown] = useState(false);
  const model = useMemo(() => tapeModel(tape, { widthPx, remPx, zone, nowMs }), [tape, widthPx, remPx, zone, nowMs]);
  const items = useMemo(() => tapeItems(tape), [tape]);
  const kinds = keyOrder.filter((kind) => items.some((item) => item.kind === kind));

  // Only when the tape gets its size: later the place is the reader's.
  const scrolledAtPx = useRef(0);
  const { scrollX } = model;
  useEffect(() => {
    if (scroller.current === null || scrolledAtPx.current === widthPx) return;
    scrolledAtPx.current = widthPx;
    scroller.current.scrollLeft = scrollX;
  }, [widthPx, scrollX]);

  const sentence = tapeSentence(tape, zone, nowMs);
  return (
    <div className="tape">
      <div
        ref={scroller}
        className="tape-scroll"
        // What scrolls can be scrolled by the keyboard too.
        {...(model.widthPx > widthPx ? { role: 'region', tabIndex: 0, 'aria-label': 'Tape of today' } : {})}
      >
        <div role="img" aria-label={`Today's portions: ${sentence}.`} style={{ width: model.widthPx }}>
          {widthPx > 0 &&
            model.lines.map((line) => (
              <div
                key={line.key}
                className={onOpen === undefined ? undefined : 'tape-line-open'}
                onClick={(event) => {
                  const item = itemAt(model, line.key, event.clientX - event.currentTarget.getBoundingClientRect().left);
                  if (item !== null) onOpen?.(item);
                }}
              >
                {model.lines.length > 1 && (
                  <Text variant="note" soft>
                    {headName(line.deviceId, line.head)}
                  </Text>
                )}
                <TapeLineSvg model={model} line={line} remPx={remPx} isStill={isStill} />
              </div>
            ))}
          {widthPx > 0 && <TapeHours model={model} remPx={remPx} />}
        </div>
      </div>
      {kinds.length > 0 && <TapeKey kinds={kinds} />}
      <div className="tape-foot">
        <Text variant="note" soft>
          {`${sentence}.`}
        </Text>
        <Button
          kind="quiet"
          onPress={() => setIsTableShown(!isTableShown)}
          expanded={isTableShown}
          controls={isTableShown ? tableId : undefined}
          name={`${isTableShown ? 'Hide table' : 'Show as table'}: today's portions`}
        >
          {isTableShown ? 'Hide table' : 'Show as table'}
        </Button>
      </div>
      {isTableShown && (
        <div id={tableId}>
          <TapeTable items={items} zone={zone} headName={headName} onOpen={onOpen} />
        </div>
      )}
    </div>
  );
}
