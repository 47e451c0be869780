import { Link, type Href } from 'expo-router';
import type { ReactNode } from 'react';
import { typeScale, type TextVariant } from '../../constants/type-scale.ts';

export interface LinkTextProps {
  href: Href;
  children: ReactNode;
  variant?: TextVariant;
  /** A line of its own, as high as a finger needs; without it the link is part of a sentence. */
  block?: boolean;
  /** Accessible name, where the visible text alone does not say enough. Starts with the visible text. */
  name?: string;
  current?: boolean;
}

/** A real link: ink, underlined. */
export function LinkText({ href, children, variant, block, name, current }: LinkTextProps) {
  return (
    <Link href={href} asChild>
      <a
        className={block === true ? 'link link-block' : 'link'}
        style={variant === undefined ? undefined : typeScale[variant]}
        aria-label={name}
        aria-current={current === true ? 'page' : undefined}
      >
        {children}
      </a>
    </Link>
  );
}
