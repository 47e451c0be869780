import Svg, { G, Line, Rect, Text } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import { fonts } from '../../../constants/fonts.ts';
import { formatNumber } from '../../../lib/format/number.ts';
import { millilitreDecimals } from '../../../lib/format/millilitres.ts';
import type { TapeBar, TapeDrop, TapeLine, TapeModel } from '../drop-tape-model.ts';
import { tapeLabels } from '../tape-labels.ts';
import { DropMark } from './drop-mark.tsx';
import { noteSize } from './lane-ground.tsx';

const drawnPx = 14;
const barHeightPx = 28;
const aboveGapPx = 6;

/** Heights of a line: extras above, portions on the line, the mL of what was given in part below. */
export function lineLayout({ drops, bars }: TapeLine, boxPx: number, remPx: number) {
  const hasAbove = drops.some((drop) => drop.row === 'above');
  const hasAmounts = drops.some((drop) => drop.item.kind === 'partial');
  const above = hasAbove ? boxPx + aboveGapPx : 4;
  const body = bars.length > 0 ? barHeightPx : boxPx;
  return { top: above, base: above + body, height: above + body + 6 + (hasAmounts ? remPx : 0) };
}

function Drop({
  drop,
  boxPx,
  layout,
  isStill,
  hasBars,
}: {
  drop: TapeDrop;
  boxPx: number;
  layout: ReturnType<typeof lineLayout>;
  isStill: boolean;
  hasBars: boolean;
}) {
  const scale = boxPx / drawnPx;
  const y = drop.row === 'above' ? 1 : hasBars ? layout.base - boxPx : layout.top;
  return (
    <G>
      <G transform={`translate(${drop.x - boxPx / 2} ${y}) scale(${scale})`}>
        <DropMark kind={drop.item.kind} fillShare={drop.fillShare} isStill={isStill} />
      </G>
      {drop.item.kind === 'partial' && (
        <Text x={drop.x} y={layout.base + 18} textAnchor="middle" fontFamily={fonts.text} fontSize={noteSize} fill={color.ink}>
          {formatNumber(drop.item.givenMl, millilitreDecimals(drop.item.givenMl))}
        </Text>
      )}
    </G>
  );
}

function Bar({ bar, base }: { bar: TapeBar; base: number }) {
  const planned = bar.plannedShare * barHeightPx;
  const given = bar.givenShare * barHeightPx;
  return (
    <G>
      <Rect x={bar.x} y={base - given} width={bar.width} height={given} fill={color.dose} />
      <Rect x={bar.x} y={base - planned} width={bar.width} height={planned} fill="none" stroke={color.dose} strokeWidth={1.25} />
    </G>
  );
}

/** One head's day. */
export function TapeLineSvg({ model, line, remPx, isStill }: { model: TapeModel; line: TapeLine; remPx: number; isStill: boolean }) {
  const layout = lineLayout(line, model.boxPx, remPx);
  return (
    <Svg width={model.widthPx} height={layout.height} aria-hidden>
      {model.hours.map((hour) => (
        <Line key={hour.x} x1={hour.x} x2={hour.x} y1={0} y2={layout.height} stroke={color.rule} strokeWidth={hour.isDayStart ? 1.5 : 1} />
      ))}
      <Line x1={0} x2={model.widthPx} y1={layout.base + 2} y2={layout.base + 2} stroke={color.edge} strokeWidth={1} />
      {line.bars.map((bar) => (
        <Bar key={bar.key} bar={bar} base={layout.base} />
      ))}
      <Line x1={model.nowX} x2={model.nowX} y1={0} y2={layout.height} stroke={color.ink} strokeWidth={2} />
      {line.drops.map((drop) => (
        <Drop key={drop.item.key} drop={drop} boxPx={model.boxPx} layout={layout} isStill={isStill} hasBars={line.bars.length > 0} />
      ))}
    </Svg>
  );
}

/** Hours under the tape, and where now is. */
export function TapeHours({ model, remPx }: { model: TapeModel; remPx: number }) {
  const { hours, now } = tapeLabels(model, remPx);
  return (
    <Svg width={model.widthPx} height={1.25 * remPx} aria-hidden>
      {hours.map((hour) => (
        <Text key={hour.key} x={hour.x} y={remPx} textAnchor="middle" fontFamily={fonts.text} fontSize={noteSize} fill={color.inkSoft}>
          {hour.label}
        </Text>
      ))}
      <Text x={now.x} y={remPx} textAnchor="middle" fontFamily={fonts.text} fontSize={noteSize} fontWeight="700" fill={color.ink}>
        {now.label}
      </Text>
    </Svg>
  );
}
