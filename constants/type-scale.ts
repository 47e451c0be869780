import { fonts } from './fonts.ts';

/**
 * A length in rem of what is `px` at the browser's usual text size, so that text follows the reader's setting.
 * React Native's types know lengths as numbers only; on the web a style is CSS, and takes the text.
 */
export function rem(px: number): number {
  return `${px / 16}rem` as never;
}

const size = (px: number, linePx: number, fontFamily: string) => ({ fontSize: rem(px), lineHeight: rem(linePx), fontFamily });

/** Every text style of the app: size and line in px at the usual text size. */
export const typeScale = {
  note: { ...size(13, 20, fonts.text), fontWeight: '400' },
  body: { ...size(16, 24, fonts.text), fontWeight: '400' },
  /** The state of a system, on a phone. */
  sentence: { ...size(19, 28, fonts.text), fontWeight: '400' },
  /** The state of a system when wide. */
  sentenceWide: { ...size(23, 28, fonts.text), fontWeight: '400' },
  /** A heading inside a screen. */
  label: { ...size(16, 24, fonts.text), fontWeight: '700' },
  heading: { ...size(23, 28, fonts.display), fontWeight: '600' },
  title: { ...size(28, 36, fonts.display), fontWeight: '600' },
  /** The one figure of a screen. */
  figure: { ...size(33, 40, fonts.figures), fontWeight: '400' },
} as const;

export type TextVariant = keyof typeof typeScale;
