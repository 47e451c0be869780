import { breakpoints } from '../constants/breakpoints.ts';
import { useMedia } from './use-media.ts';

export type Breakpoint = 'phone' | 'two-panes' | 'wide';

/** How much stands beside each other. Asked at shell and screen level; parts take the width they are given. */
export function useBreakpoint(): Breakpoint {
  const isTwoPanes = useMedia(`(min-width: ${breakpoints.twoPanes}px)`);
  const isWide = useMedia(`(min-width: ${breakpoints.wide}px)`);
  if (isWide) return 'wide';
  return isTwoPanes ? 'two-panes' : 'phone';
}
