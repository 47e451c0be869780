import { createContext, useContext, type ReactNode } from 'react';
import { StyleSheet, Text as NativeText, type TextProps as NativeTextProps } from 'react-native';
import { color } from '../../constants/color.ts';
import { fonts } from '../../constants/fonts.ts';
import { typeScale, type TextVariant } from '../../constants/type-scale.ts';

export interface TextProps extends Omit<NativeTextProps, 'style'> {
  children: ReactNode;
  /** The size; a nested text without one keeps the size around it. */
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

const InsideText = createContext(false);

/** Text in the styles of the type scale; plain ink unless said otherwise. A line of its own, or a part of the text it stands in. */
export function Text({ children, variant, soft, bold, figures, align, inherit, ...rest }: TextProps) {
  const isInside = useContext(InsideText);
  const scale = variant ?? (isInside ? undefined : 'body');
  return (
    <NativeText
      {...rest}
      style={[
        !isInside && styles.line,
        !isInside && styles.ink,
        scale !== undefined && typeScale[scale],
        soft === true && styles.soft,
        bold === true && styles.bold,
        figures === true && styles.figures,
        align !== undefined && { textAlign: align },
        inherit === true && styles.inherit,
      ]}
    >
      <InsideText value>{children}</InsideText>
    </NativeText>
  );
}

const styles = StyleSheet.create({
  // React Native's types know no block; between elements of the page's own a line of text must be one.
  line: { display: 'block' as 'flex' },
  ink: { color: color.ink },
  soft: { color: color.inkSoft },
  bold: { fontWeight: '700' },
  figures: { fontFamily: fonts.figures, fontVariant: ['tabular-nums'] },
  inherit: { color: 'inherit' },
});
