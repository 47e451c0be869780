import { existsSync, readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';

const files = ['README.md', 'DEVELOPERS.md', ...readdirSync('docs').flatMap((name) => (name.endsWith('.md') ? [`docs/${name}`] : []))];
const { scripts } = JSON.parse(readFileSync('package.json', 'utf8')) as { scripts: Record<string, string> };

/** Targets of links and pictures; what has a scheme leads out of the project. */
function relativeLinks(text: string): string[] {
  return [...text.matchAll(/\]\(([^)\s]+)\)/g)].flatMap(([, target = '']) => (/^[a-z][a-z0-9+.-]*:/i.test(target) ? [] : [target]));
}

/** The anchor of a heading: lower case, words joined by hyphens, other marks left out. */
function anchors(text: string): string[] {
  return [...text.matchAll(/^#+ +(.+)$/gm)].map(([, heading = '']) =>
    heading
      .toLowerCase()
      .replace(/[^\p{L}\p{N} _-]/gu, '')
      .replaceAll(' ', '-'),
  );
}

function namedScripts(text: string): string[] {
  const run = [...text.matchAll(/\bnpm run ([a-z][a-z:-]*)/g)].map(([, name = '']) => name);
  return [...run, ...[...text.matchAll(/\bnpm (start|test)\b/g)].map(([, name = '']) => name)];
}

/** Paths in backquotes that begin with a folder of the project; patterns and placeholders are none. */
function namedPaths(text: string): string[] {
  const rooms = 'app|assets|broker|components|constants|docs|hooks|lib|public|scripts|server|shared|simulators|tests';
  return [...text.matchAll(new RegExp(`\`((?:${rooms})/[A-Za-z0-9/._-]*)\``, 'g'))].flatMap(([, name = '']) =>
    name.includes('00N') ? [] : [name],
  );
}

describe.each(files)('%s', (file) => {
  const text = readFileSync(file, 'utf8');

  it('links to nothing that is missing', () => {
    const missing = relativeLinks(text).filter((link) => {
      const [target = '', anchor] = link.split('#');
      const linked = target === '' ? file : path.join(path.dirname(file), target);
      return !existsSync(linked) || (anchor !== undefined && !anchors(readFileSync(linked, 'utf8')).includes(anchor));
    });
    expect(missing).toEqual([]);
  });

  it('names no command that package.json does not have', () => {
    expect(namedScripts(text).filter((name) => !(name in scripts))).toEqual([]);
  });

  it('names no file or folder that is not there', () => {
    expect(namedPaths(text).filter((name) => !existsSync(name))).toEqual([]);
  });
});

it('finds links, commands and paths in them', () => {
  const all = files.map((file) => readFileSync(file, 'utf8')).join('\n');
  expect(relativeLinks(all)).toContain('docs/devices.md');
  expect(namedScripts(all)).toEqual(expect.arrayContaining(['start', 'test', 'bench', 'simulate']));
  expect(namedPaths(all)).toContain('shared/domain/alarm-codes.ts');
});
