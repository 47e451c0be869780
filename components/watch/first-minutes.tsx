import Svg, { Path, Rect } from 'react-native-svg';
import { color } from '../../constants/color.ts';
import { Button } from '../ui/button.tsx';
import { Heading } from '../ui/heading.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Text } from '../ui/text.tsx';
import { VisuallyHidden } from '../ui/visually-hidden.tsx';
import type { CheckLine } from './watch-model.ts';

export interface FirstMinutesProps {
  lines: readonly CheckLine[];
  systemId: string;
  mayConnect: boolean;
  onHandDose: () => void;
}

function Box({ isDone }: { isDone: boolean }) {
  return (
    <Svg width={18} height={18} viewBox="0 0 18 18" aria-hidden>
      <Rect x={1.5} y={1.5} width={15} height={15} fill="none" stroke={color.edge} strokeWidth={1.5} />
      {isDone && <Path d="M4 9.5l3.5 3.5l6.5 -8" fill="none" stroke={color.ink} strokeWidth={2.5} />}
    </Svg>
  );
}

/** The first minutes: three doors, and four lines that tell what is still missing. */
export function FirstMinutes({ lines, systemId, mayConnect, onHandDose }: FirstMinutesProps) {
  return (
    <section className="watch-first" aria-labelledby="first-minutes">
      <Heading level={2} id="first-minutes">
        Begin here
      </Heading>
      <div className="watch-doors">
        <LinkText href={`/systems/${systemId}/tests?new=1`} block>
          Write down a test
        </LinkText>
        {mayConnect && (
          <LinkText href={`/systems/${systemId}/rig`} block>
            Connect a pump or probe
          </LinkText>
        )}
        <Button kind="quiet" onPress={onHandDose}>
          I dose by hand
        </Button>
      </div>
      <ul className="watch-checks">
        {lines.map((line) => (
          <li key={line.key}>
            <Box isDone={line.isDone} />
            <Text soft={line.isDone}>{line.words}</Text>
            <VisuallyHidden>{line.isDone ? 'done' : 'still to do'}</VisuallyHidden>
          </li>
        ))}
      </ul>
    </section>
  );
}
