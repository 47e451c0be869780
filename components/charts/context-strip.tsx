import { DateTime } from 'luxon';
import { useRef, type KeyboardEvent, type PointerEvent } from 'react';
import Svg, { Circle, Line, Rect, Text } from 'react-native-svg';
import { color } from '../../constants/color.ts';
import { fonts } from '../../constants/fonts.ts';
import { dragWindow, gripAt, type Grip } from './context-window.ts';
import { noteSize } from './svg/lane-ground.tsx';
import type { TestShape } from './test-marks.ts';
import type { AxisLimits, TimeRange } from './time-axis.ts';
import { panBy, spanOf, timeScale } from './time-axis.ts';
import { timeTicks } from './time-ticks.ts';
import { useElementWidth } from './use-element-width.ts';

export interface ContextStripProps {
  /** All that there is. */
  whole: TimeRange;
  range: TimeRange;
  limits: AxisLimits;
  zone: string;
  /** When tests were made, each kind on a row of its own. */
  rows: readonly { readonly shape: TestShape; readonly times: readonly number[] }[];
  onRange: (range: TimeRange) => void;
  /** A drag began or ended. */
  onHold: (isHeld: boolean) => void;
}

const heightPx = 44;
const labelRem = 4;

interface Drag {
  grip: Grip;
  startX: number;
  start: TimeRange;
}

/** The whole history in one strip: drag the window or its ends, or press beside it. Arrow keys move it by half of itself. */
export function ContextStrip({ whole, range, limits, zone, rows, onRange, onHold }: ContextStripProps) {
  const strip = useRef<HTMLDivElement>(null);
  const drag = useRef<Drag | null>(null);
  const { widthPx, remPx } = useElementWidth(strip);
  const scale = timeScale(whole, 0, Math.max(widthPx, 1));
  const window = { left: scale.toX(range.fromMs), right: scale.toX(range.toMs) };
  const placeOf = (event: PointerEvent) => event.clientX - (strip.current?.getBoundingClientRect().left ?? 0);

  function move(event: PointerEvent): void {
    const held = drag.current;
    if (held === null) return;
    const x = placeOf(event);
    const deltaMs = scale.toMs(x) - scale.toMs(held.startX);
    onRange(dragWindow(held.start, held.grip, deltaMs, scale.toMs(held.startX), limits));
  }

  function letGo(): void {
    drag.current = null;
    onHold(false);
  }

  function onKeyDown(event: KeyboardEvent): void {
    const direction = { ArrowLeft: -1, ArrowRight: 1 }[event.key];
    if (direction === undefined) return;
    event.preventDefault();
    onRange(panBy(range, (direction * spanOf(range)) / 2, limits));
  }

  const day = (tMs: number) => DateTime.fromMillis(tMs, { zone }).toFormat('d LLLL yyyy');
  return (
    <div
      ref={strip}
      className="context-strip"
      role="slider"
      tabIndex={0}
      aria-label="Range shown, in the whole history"
      aria-valuemin={Math.round(whole.fromMs / 1000)}
      aria-valuemax={Math.round(whole.toMs / 1000)}
      aria-valuenow={Math.round(range.fromMs / 1000)}
      aria-valuetext={`${day(range.fromMs)} to ${day(range.toMs)}`}
      onKeyDown={onKeyDown}
      onPointerDown={(event) => {
        const startX = placeOf(event);
        drag.current = { grip: gripAt(startX, window), startX, start: range };
        event.currentTarget.setPointerCapture(event.pointerId);
        onHold(true);
        move(event);
      }}
      onPointerMove={move}
      onPointerUp={letGo}
      onPointerCancel={letGo}
    >
      <Svg width={widthPx} height={heightPx} aria-hidden pointerEvents="none">
        <Rect x={0} y={0} width={widthPx} height={heightPx} fill={color.sheet} />
        {timeTicks(whole, zone, widthPx / (labelRem * remPx)).map((tick) => (
          <Line key={tick.tMs} x1={scale.toX(tick.tMs)} x2={scale.toX(tick.tMs)} y1={0} y2={heightPx} stroke={color.rule} strokeWidth={1} />
        ))}
        {timeTicks(whole, zone, widthPx / (labelRem * remPx)).map((tick) => (
          <Text
            key={tick.tMs}
            x={scale.toX(tick.tMs) + 4}
            y={heightPx - 5}
            fill={color.inkSoft}
            fontFamily={fonts.text}
            fontSize={noteSize}
          >
            {tick.label}
          </Text>
        ))}
        {rows.flatMap((row, i) =>
          row.times.map((tMs) => {
            const x = scale.toX(tMs);
            const y = 9 + i * 9;
            return row.shape === 'circle' ? (
              <Circle key={`${i} ${tMs}`} cx={x} cy={y} r={2.5} fill={color.ink} />
            ) : (
              <Rect key={`${i} ${tMs}`} x={x - 2.5} y={y - 2.5} width={5} height={5} fill={color.ink} />
            );
          }),
        )}
      </Svg>
      <div className="context-strip-window" style={{ left: window.left, width: Math.max(window.right - window.left, 6) }} />
    </div>
  );
}
