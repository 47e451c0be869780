import { Link, type Href } from 'expo-router';
import type { ReactNode } from 'react';
import { StyleSheet } from 'react-native';
import { color } from '../../constants/color.ts';
import { typeScale, type TextVariant } from '../../constants/type-scale.ts';

export interface LinkTextProps {
  href: Href;
  children: ReactNode;
  variant?: TextVariant;
  /** A line of its own, as high as a finger needs. */
  block?: boolean;
  /** Accessible name, where the visible text alone does not say enough. Starts with the visible text. */
  name?: string;
  current?: boolean;
}

/** A real link: ink, underlined. */
export function LinkText({ href, children, variant = 'body', block, name, current }: LinkTextProps) {
  return (
    <Link
      href={href}
      aria-label={name}
      aria-current={current === true ? 'page' : undefined}
      style={[typeScale[variant], styles.link, block === true && styles.block]}
    >
      {children}
    </Link>
  );
}

const styles = StyleSheet.create({
  link: { color: color.ink, textDecorationLine: 'underline' },
  block: { minHeight: 44, paddingVertical: 10, alignSelf: 'flex-start' },
});
