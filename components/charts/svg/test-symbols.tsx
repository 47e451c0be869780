import { line } from 'd3-shape';
import { Circle, G, Line, Path, Rect } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import type { TestMark, TestMarks } from '../test-marks.ts';
import type { Point } from '../trace-model.ts';

const circleRadius = 4;
const squareSide = 8;
const ringRadius = 8.5;

const lineOf = line<Point>(
  (point) => point.x,
  (point) => point.y,
);

/** Filled where measured; open where the result only says "under", with an arrow to where the truth lies. */
export function TestSymbol({ mark }: { mark: TestMark }) {
  const { x, y, below } = mark;
  const paint = { fill: below ? color.ground : color.ink, stroke: color.ink, strokeWidth: 1.5 };
  return (
    <G>
      {mark.whisker && (
        <Path
          d={`M${x} ${mark.whisker.top}V${mark.whisker.bottom}M${x - 4} ${mark.whisker.top}h8M${x - 4} ${mark.whisker.bottom}h8`}
          stroke={color.ink}
          strokeWidth={1}
          fill="none"
        />
      )}
      {mark.shape === 'circle' ? (
        <Circle cx={x} cy={y} r={circleRadius} {...paint} />
      ) : (
        <Rect x={x - squareSide / 2} y={y - squareSide / 2} width={squareSide} height={squareSide} {...paint} />
      )}
      {below && <Path d={`M${x} ${y + 5}v9m-3 -3.5l3 3.5l3 -3.5`} stroke={color.ink} strokeWidth={1.5} fill="none" />}
      {mark.edited && <Circle cx={x} cy={y} r={ringRadius} fill="none" stroke={color.ink} strokeWidth={1} />}
    </G>
  );
}

/** A line through results that follow one another, and a bar at the mean of those that repeat one another. */
export function TestLines({ tests }: { tests: TestMarks }) {
  return (
    <G>
      {tests.lines.map((points, i) => (
        <Path
          key={i}
          d={lineOf([...points]) ?? ''}
          fill="none"
          stroke={color.ink}
          strokeWidth={1.25}
          strokeDasharray={tests.dashed ? '6 4' : undefined}
        />
      ))}
      {tests.meanBars.map((bar) => (
        <Line key={bar.x1} x1={bar.x1} x2={bar.x2} y1={bar.y} y2={bar.y} stroke={color.ink} strokeWidth={2} />
      ))}
    </G>
  );
}

/** Marks just outside are left out, those at the very edge keep their whole shape. */
const overhangPx = 2;

export function TestSymbols({ tests, left, right }: { tests: TestMarks; left: number; right: number }) {
  return (
    <G>
      {tests.marks
        .filter((mark) => mark.x >= left - overhangPx && mark.x <= right + overhangPx)
        .map((mark) => (
          <TestSymbol key={mark.id} mark={mark} />
        ))}
    </G>
  );
}
