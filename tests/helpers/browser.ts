import { AxeBuilder } from '@axe-core/playwright';
import type { Browser, Page } from 'playwright-core';
import { expect } from 'vitest';

declare global {
  interface Window {
    /** Put into each page by `openPage`. */
    reportViolation(text: string): void;
  }
}

/** The two widths at which everything is looked at. */
export const widths = { phone: { width: 390, height: 844 }, wide: { width: 1280, height: 860 } } as const;
export type Width = keyof typeof widths;

export interface WatchedPage {
  page: Page;
  /** Fails when the page broke the content-security policy, threw, or logged an error. */
  expectClean(): void;
  /** Fails on any axe violation of WCAG 2.2 AA, target size included, in both themes. */
  expectAccessible(): Promise<void>;
  close(): Promise<void>;
}

/** A page of its own session that remembers everything that went wrong in it. */
export async function openPage(browser: Browser, url: string, width: Width): Promise<WatchedPage> {
  const context = await browser.newContext({ viewport: widths[width], baseURL: url, reducedMotion: 'reduce' });
  const page = await context.newPage();
  const faults: string[] = [];
  page.on('pageerror', (error) => faults.push(`threw: ${error.message}`));
  page.on('console', (message) => {
    // A refused request is part of some journeys (the first refresh without a cookie); the policy and exceptions are not.
    if (message.type() === 'error' && !message.text().startsWith('Failed to load resource')) faults.push(`logged: ${message.text()}`);
  });
  await page.exposeFunction('reportViolation', (text: string) => faults.push(`policy: ${text}`));
  await page.addInitScript(() => {
    document.addEventListener('securitypolicyviolation', (event) => {
      window.reportViolation(`${event.violatedDirective} ${event.blockedURI}`);
    });
  });
  return {
    page,
    expectClean: () => expect(faults).toEqual([]),
    async expectAccessible() {
      for (const colorScheme of ['light', 'dark'] as const) {
        await page.emulateMedia({ colorScheme });
        // Two frames, so that what is judged is what the theme painted.
        await page.evaluate(() => new Promise((resolve) => requestAnimationFrame(() => requestAnimationFrame(resolve))));
        const results = await new AxeBuilder({ page })
          .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'])
          .options({ rules: { 'target-size': { enabled: true } } })
          .analyze();
        const found = results.violations.map(
          (violation) => `${violation.id}: ${violation.nodes.map((node) => `${node.html} (${node.failureSummary ?? ''})`).join(' | ')}`,
        );
        expect(found, `${page.url()} in ${colorScheme}`).toEqual([]);
      }
      await page.emulateMedia({ colorScheme: 'light' });
    },
    close: () => context.close(),
  };
}

/** Signs in through the screen and waits for Rounds. */
export async function signIn(page: Page, email: string, password: string): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('E-mail').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.getByRole('heading', { name: 'Rounds', level: 1 }).waitFor();
}
