import type { ReactNode } from 'react';
import type { TextVariant } from '../../constants/type-scale.ts';
import { Text } from './text.tsx';

const variants: Record<1 | 2 | 3, TextVariant> = { 1: 'title', 2: 'heading', 3: 'label' };

export interface HeadingProps {
  level: 1 | 2 | 3;
  children: ReactNode;
  variant?: TextVariant;
  id?: string;
  /** Takes the colour around it, inside a filled block. */
  inherit?: boolean;
}

/** A heading of the page's outline: level 1 once a screen, then 2 and 3 without gaps. */
export function Heading({ level, children, variant, id, inherit }: HeadingProps) {
  return (
    <Text role="heading" aria-level={level} variant={variant ?? variants[level]} id={id} inherit={inherit}>
      {children}
    </Text>
  );
}
