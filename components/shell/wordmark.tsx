import Svg, { Path } from 'react-native-svg';

/** Three steps and a line, and the name. */
export function Wordmark() {
  return (
    <span className="wordmark">
      <Svg width={28} height={28} viewBox="0 0 64 64" aria-hidden>
        <Path d="M6 46h16V32h16V18h20" fill="none" stroke="currentColor" strokeWidth={7} />
        <Path d="M6 58h52" stroke="currentColor" strokeWidth={4} />
      </Svg>
      Steadfall
    </span>
  );
}
