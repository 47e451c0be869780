import { G, Path, Rect } from 'react-native-svg';
import { color } from '../../../constants/color.ts';
import type { DoseMarks } from '../dose-bars.ts';

/** What was given: pump columns filled, hand doses open with a cap, and over them the plan as steps. */
export function DoseColumns({ doses }: { doses: DoseMarks }) {
  const corners = doses.stepLine.map((corner) => `${corner.x} ${corner.y}`).join('L');
  return (
    <G>
      {doses.bars.map((bar) =>
        bar.kind === 'pump' ? (
          <Rect key={`pump ${bar.x}`} x={bar.x} y={bar.y} width={bar.width} height={bar.height} fill={color.dose} />
        ) : (
          <G key={`hand ${bar.x}`}>
            <Rect
              x={bar.x + 0.5}
              y={bar.y}
              width={Math.max(bar.width - 1, 1)}
              height={bar.height}
              fill={color.ground}
              stroke={color.dose}
              strokeWidth={1.25}
            />
            <Path d={`M${bar.x - 2} ${bar.y}h${bar.width + 4}`} stroke={color.dose} strokeWidth={2.5} fill="none" />
          </G>
        ),
      )}
      {corners !== '' && (
        <G>
          <Path d={`M${corners}`} fill="none" stroke={color.ground} strokeWidth={4} />
          <Path d={`M${corners}`} fill="none" stroke={color.dose} strokeWidth={2} />
        </G>
      )}
    </G>
  );
}
