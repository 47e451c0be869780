import { randomInt } from 'node:crypto';

/** Without the letters and digits that are mistaken for each other. */
const alphabet = '23456789ABCDEFGHJKMNPQRSTVWXYZ';

/** A code that a person copies from the terminal, such as `K7QM-2XRD-9WTF`: 58 bits. */
export function makeWelcomeCode(): string {
  const group = () => Array.from({ length: 4 }, () => alphabet[randomInt(alphabet.length)]).join('');
  return [group(), group(), group()].join('-');
}

/** As typed: case, spaces and dashes do not matter. */
export function plainWelcomeCode(code: string): string {
  return code.toUpperCase().replace(/[^0-9A-Z]/g, '');
}
