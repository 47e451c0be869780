import figures400 from '@fontsource/atkinson-hyperlegible-mono/files/atkinson-hyperlegible-mono-latin-400-normal.woff2';
import text400 from '@fontsource/atkinson-hyperlegible-next/files/atkinson-hyperlegible-next-latin-400-normal.woff2';
import text700 from '@fontsource/atkinson-hyperlegible-next/files/atkinson-hyperlegible-next-latin-700-normal.woff2';
import display600 from '@fontsource/bricolage-grotesque/files/bricolage-grotesque-latin-600-normal.woff2';
import { fontFamilies } from '../../constants/fonts.ts';

const faces = [
  { family: fontFamilies.text, weight: '400', url: text400 },
  { family: fontFamilies.text, weight: '700', url: text700 },
  { family: fontFamilies.display, weight: '600', url: display600 },
  { family: fontFamilies.figures, weight: '400', url: figures400 },
];

/**
 * Makes the bundled fonts known to the page and starts loading them; text shows in the fallback until then.
 * Through the Font Loading API, since a style element with text in it is refused by the content-security policy.
 */
export function registerFonts(): void {
  for (const { family, weight, url } of faces) {
    const face = new FontFace(family, `url("${url}") format("woff2")`, { weight, style: 'normal', display: 'swap' });
    document.fonts.add(face);
    face.load().catch(() => {
      // The page stays readable in the fallback; the browser itself reports the failed request.
      document.fonts.delete(face);
    });
  }
}
