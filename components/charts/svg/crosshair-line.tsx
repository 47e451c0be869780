import { Line } from 'react-native-svg';
import { color } from '../../../constants/color.ts';

export function CrosshairLine({ x, height }: { x: number; height: number }) {
  return <Line x1={x} x2={x} y1={0} y2={height} stroke={color.ink} strokeWidth={1.5} strokeDasharray="4 2" />;
}
