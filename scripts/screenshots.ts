import { mkdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { launchChromium, signIn } from './screenshots/browser.ts';

/**
 * `npm run screenshots -- [URL] [FOLDER]`: every screen of a running demo at phone and wide, in both themes, into a folder
 * that is not committed, and the README's picture made from two of them.
 */
const url = process.argv[2] ?? 'http://127.0.0.1:4000';
const folder = process.argv[3] ?? 'screenshots';
const overview = 'docs/images/overview.png';
const sizes = { phone: { width: 390, height: 844 }, wide: { width: 1280, height: 860 } } as const;
const screens = ['', 'overlay', 'tests', 'alarms', 'rig'] as const;

async function settle(page: Page): Promise<void> {
  await page.waitForLoadState('networkidle');
  await page.evaluate(() => document.fonts.ready.then(() => undefined));
}

async function shoot(browser: Browser, size: keyof typeof sizes, theme: 'light' | 'dark'): Promise<void> {
  const context = await browser.newContext({ viewport: sizes[size], colorScheme: theme, deviceScaleFactor: 2, reducedMotion: 'reduce' });
  const page = await context.newPage();
  const take = async (name: string) => {
    await settle(page);
    await page.screenshot({ path: path.join(folder, `${name}-${size}-${theme}.png`) });
  };
  await page.goto(`${url}/sign-in`);
  await take('sign-in');
  await signIn(page, url, 'keeper@ternlane.example', 'steady drops only');
  await take('rounds');
  const systems = await page.evaluate(async () => {
    const grant = await fetch('/api/auth/refresh', { method: 'POST' }).then((answer) => answer.json() as Promise<{ accessToken: string }>);
    const headers = { authorization: `Bearer ${grant.accessToken}` };
    return fetch('/api/systems', { headers }).then((answer) => answer.json() as Promise<{ items: { id: string; name: string }[] }>);
  });
  const system = systems.items.find((item) => item.name === 'Front window') ?? systems.items[0];
  if (system === undefined) throw new Error('The demo has no systems: start it with DEMO=1');
  for (const screen of screens) {
    await page.goto(`${url}/systems/${system.id}/${screen}`);
    await page.getByRole('heading').first().waitFor();
    await take(screen === '' ? 'watch' : screen);
  }
  await page.goto(`${url}/account`);
  await page.getByRole('heading').first().waitFor();
  await take('account');
  await context.close();
}

/** The README's picture: Watch on a phone in front of Overlay on a wide screen. */
async function compose(browser: Browser): Promise<void> {
  const picture = (name: string) => `data:image/png;base64,${readFileSync(path.join(folder, `${name}.png`)).toString('base64')}`;
  const page = await browser.newPage({ viewport: { width: 1400, height: 900 } });
  await page.setContent(
    `<body style="margin:0;background:#d9d1c0;display:flex;gap:28px;align-items:center;justify-content:center;height:900px">
      <img style="height:820px;border:1px solid #8c8371" src="${picture('watch-phone-light')}">
      <img style="width:930px;border:1px solid #8c8371" src="${picture('overlay-wide-light')}">
    </body>`,
  );
  await page.screenshot({ path: overview });
  await page.close();
}

mkdirSync(folder, { recursive: true });
mkdirSync(path.dirname(overview), { recursive: true });
const browser = await launchChromium();
try {
  for (const size of ['phone', 'wide'] as const) for (const theme of ['light', 'dark'] as const) await shoot(browser, size, theme);
  await compose(browser);
} finally {
  await browser.close();
}
