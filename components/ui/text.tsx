import type { ReactNode } from 'react';
import { StyleSheet, Text as NativeText, type TextProps as NativeTextProps } from 'react-native';
import { color } from '../../constants/color.ts';
import { fonts } from '../../constants/fonts.ts';
import { typeScale, type TextVariant } from '../../constants/type-scale.ts';

export interface TextProps extends Omit<NativeTextProps, 'style'> {
  children: ReactNode;
  variant?: TextVariant;
  /** Secondary text. */
  soft?: boolean;
  bold?: boolean;
  /** Tabular figures, for numbers that stand under each other. */
  figures?: boolean;
  align?: 'left' | 'right' | 'center';
  /** Inherits the colour around it, inside a filled block. */
  inherit?: boolean;
}

/** Text in the styles of the type scale; plain ink unless said otherwise. */
export function Text({ children, variant = 'body', soft, bold, figures, align, inherit, ...rest }: TextProps) {
  return (
    <NativeText
      {...rest}
      style={[
        styles.base,
        typeScale[variant],
        soft === true && styles.soft,
        bold === true && styles.bold,
        figures === true && styles.figures,
        align !== undefined && { textAlign: align },
        inherit === true && styles.inherit,
      ]}
    >
      {children}
    </NativeText>
  );
}

const styles = StyleSheet.create({
  base: { color: color.ink },
  soft: { color: color.inkSoft },
  bold: { fontWeight: '700' },
  figures: { fontFamily: fonts.figures, fontVariant: ['tabular-nums'] },
  inherit: { color: 'inherit' },
});
