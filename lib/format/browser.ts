const browsers: [RegExp, string][] = [
  [/Edg\//, 'Edge'],
  [/Firefox\//, 'Firefox'],
  [/Chrome\/|Chromium\//, 'Chrome'],
  [/Safari\//, 'Safari'],
];
const places: [RegExp, string][] = [
  [/iPhone/, 'an iPhone'],
  [/iPad/, 'an iPad'],
  [/Android/, 'Android'],
  [/Windows/, 'Windows'],
  [/Macintosh/, 'a Mac'],
  [/Linux/, 'Linux'],
];

const firstOf = (table: [RegExp, string][], text: string) => table.find(([pattern]) => pattern.test(text))?.[1];

/** A browser as people know it (`Firefox on Linux`), from what it says of itself. */
export function browserWords(userAgent: string): string {
  const browser = firstOf(browsers, userAgent);
  const place = firstOf(places, userAgent);
  if (browser === undefined) return userAgent.slice(0, 40) || 'Unknown browser';
  return place === undefined ? browser : `${browser} on ${place}`;
}
