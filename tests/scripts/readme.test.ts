import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { configSchema, readConfig } from '../../server/config.ts';

const readme = readFileSync('README.md', 'utf8');
const table = readme.slice(readme.indexOf('## Configuration'), readme.indexOf('## Cautions'));
const rows = table.split('\n').filter((line) => line.startsWith('| `'));

describe('the configuration table of the README', () => {
  it('names every variable that the server reads, and no other', () => {
    const named = rows.flatMap((row) => [...(row.split('|')[1] ?? '').matchAll(/`([A-Z_]+)`/g)].map((match) => match[1]));
    expect(named.sort()).toEqual(Object.keys(configSchema.shape).sort());
  });

  it('states the defaults that the server uses', () => {
    const defaults = readConfig({});
    for (const row of rows) {
      const [, names = '', stated = ''] = row.split('|');
      const name = /`([A-Z_]+)`/.exec(names)?.[1] as keyof typeof defaults;
      const value = /`([^`]+)`/.exec(stated)?.[1];
      const actual = defaults[name];
      expect(value, name).toBe(actual === undefined ? undefined : String(actual === true ? 1 : actual));
    }
  });
});

describe('the configuration', () => {
  it('lists every bad value at once', () => {
    expect(() => readConfig({ PORT: 'abc', DEMO: 'yes', TLS_CERT: 'a.pem' })).toThrowError(/PORT.*\nDEMO/s);
  });
});
