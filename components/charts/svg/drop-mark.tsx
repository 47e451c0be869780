import { useId } from 'react';
import { Circle, ClipPath, G, Line, Path, Rect, Text } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import { fonts } from '../../../constants/fonts.ts';
import type { TapeKind } from '../drop-tape-model.ts';

/** A drop in a box of 14 by 14. */
const dropPath = 'M7 0.8C7 0.8 2.4 5.6 2.4 8.8a4.6 4.6 0 0 0 9.2 0C11.6 5.6 7 0.8 7 0.8Z';
const dropTop = 0.8;
const dropBottom = 13.4;

/** A drop filled from below. */
function FilledTo({ share }: { share: number }) {
  const id = `${useId()}fill`;
  const height = (dropBottom - dropTop) * share;
  return (
    <G>
      <ClipPath id={id}>
        <Rect x={0} y={dropBottom - height} width={14} height={height + 1} />
      </ClipPath>
      <Path d={dropPath} fill={color.dose} clipPath={`url(#${id})`} />
      <Path d={dropPath} fill="none" stroke={color.dose} strokeWidth={1.5} />
    </G>
  );
}

function Open({ stroke = color.dose }: { stroke?: string }) {
  return <Path d={dropPath} fill={color.ground} stroke={stroke} strokeWidth={1.5} />;
}

export interface DropMarkProps {
  kind: TapeKind;
  /** How far a running drop is filled, 0 to 1. */
  fillShare?: number;
  /** A running drop is shown half-filled. */
  isStill?: boolean;
}

/** The marks of the tape, each a shape of its own, in a box of 14 by 14. */
export function DropMark({ kind, fillShare = 0, isStill = false }: DropMarkProps) {
  switch (kind) {
    case 'planned':
      return <Open />;
    case 'running':
      return (
        <G>
          <FilledTo share={isStill ? 0.5 : Math.max(0.12, fillShare)} />
          <Line x1={1} x2={13} y1={15.5} y2={15.5} stroke={color.dose} strokeWidth={1.5} />
        </G>
      );
    case 'delivered':
      return <Path d={dropPath} fill={color.dose} stroke={color.dose} strokeWidth={1.5} />;
    case 'partial':
      return <FilledTo share={0.5} />;
    case 'unheard':
      return (
        <G>
          <Path d={dropPath} fill={color.ground} stroke={color.ink} strokeWidth={1.25} strokeDasharray="1.5 1.7" />
          <Text x={7} y={11.7} textAnchor="middle" fontFamily={fonts.text} fontSize={8.5} fontWeight="700" fill={color.ink}>
            ?
          </Text>
        </G>
      );
    case 'missed':
      return (
        <G>
          <Open stroke={color.ink} />
          <Path d="M2 3.5l10 9M12 3.5l-10 9" stroke={color.ink} strokeWidth={1.5} fill="none" />
        </G>
      );
    case 'held':
      return (
        <G>
          <Open stroke={color.ink} />
          <Line x1={0.5} x2={13.5} y1={8.4} y2={8.4} stroke={color.ink} strokeWidth={2} />
        </G>
      );
    case 'interlocked':
      return (
        <G>
          <Rect x={1} y={1} width={12} height={12} fill={color.ink} />
          <Line x1={3} x2={11} y1={7} y2={7} stroke={color.ground} strokeWidth={2} />
        </G>
      );
    case 'hand':
      return (
        <G>
          <Path d={dropPath} fill={color.dose} stroke={color.dose} strokeWidth={1.5} />
          <Line x1={7} x2={7} y1={13.4} y2={18} stroke={color.dose} strokeWidth={2} />
          <Circle cx={7} cy={18} r={1.5} fill={color.dose} />
        </G>
      );
    case 'unplanned':
      return (
        <G>
          <Path d="M7 0.5L13.5 7L7 13.5L0.5 7Z" fill={color.ink} />
          <Line x1={4} x2={10} y1={10} y2={4} stroke={color.ground} strokeWidth={1.75} />
        </G>
      );
  }
}
