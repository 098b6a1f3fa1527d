/** The HTML report as a browser shows it: a real Chromium without a screen, axe-core for roles and contrast (WCAG 2.2, A and AA). */
import { mkdtempSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { type Browser, type BrowserContext, chromium, type Page } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import type { Finding } from '../../src/model/finding.ts';
import type { Report } from '../../src/report/report.ts';
import { reportHtml } from '../../src/report/report-html.ts';
import { describeWith } from '../support/tools.ts';
import { fullReport } from './full-report.ts';

const AXE = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
const FLAGS = ['--no-sandbox', '--disable-gpu', '--no-first-run', '--disable-background-networking'];

describeWith(['chromium'], 'the HTML report in Chromium', () => {
  let browser: Browser;
  beforeAll(async () => {
    browser = await chromium.launch({ executablePath: '/usr/bin/chromium', args: FLAGS });
  }, 60_000);
  afterAll(() => browser?.close());

  interface Opened {
    readonly page: Page;
    readonly context: BrowserContext;
    readonly complaints: string[];
    readonly requests: string[];
  }

  async function open(report: Report, scheme: 'light' | 'dark' = 'light', script = true): Promise<Opened> {
    const file = join(mkdtempSync(join(tmpdir(), 'mortise-html-')), 'report.html');
    writeFileSync(file, reportHtml(report));
    // axe-core is put in past the policy of the file, which lets no script run.
    const context = await browser.newContext({
      colorScheme: scheme,
      bypassCSP: script,
      viewport: { width: 1000, height: 800 },
    });
    const page = await context.newPage();
    const complaints: string[] = [];
    const requests: string[] = [];
    page.on('console', (message) => message.type() === 'error' && complaints.push(message.text()));
    page.on('pageerror', (error) => complaints.push(String(error)));
    page.on('request', (request) => requests.push(request.url()));
    await page.goto(pathToFileURL(file).href);
    return { page, context, complaints, requests };
  }

  it('opens from a file without a complaint and without a request that leaves it', async () => {
    const { context, page, complaints, requests } = await open(fullReport, 'light', false);
    await page.waitForTimeout(200);
    expect(complaints).toEqual([]);
    expect(requests.filter((url) => !/^file:.*\/report\.html$/.test(url))).toEqual([]);
    expect(requests).toHaveLength(1);
    await context.close();
  });

  it.each(['light', 'dark'] as const)(
    'has sound roles, names and contrast in %s',
    async (scheme) => {
      const { context, page } = await open(fullReport, scheme);
      await page.evaluate("document.querySelectorAll('details').forEach((one) => { one.open = true; })");
      await page.evaluate(AXE);
      const violations = await page.evaluate(async () => {
        const { axe } = globalThis as unknown as {
          axe: { run(options: object): Promise<{ violations: { id: string; nodes: { html: string }[] }[] }> };
        };
        const result = await axe.run({
          runOnly: ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'],
        });
        return result.violations.map(
          (one) =>
            `${one.id}: ${one.nodes
              .map((node) => node.html)
              .slice(0, 3)
              .join(' ')}`,
        );
      });
      expect(violations).toEqual([]);
      await context.close();
    },
    60_000,
  );

  it('lets the keyboard reach and open every fold', async () => {
    const { context, page } = await open(fullReport);
    const folds = await page.locator('summary').count();
    expect(folds).toBeGreaterThan(2);
    const reached = new Set<string>();
    for (let presses = 0; presses < folds + 30; presses++) {
      await page.keyboard.press('Tab');
      const here = await page.evaluate<string | null>(
        "document.activeElement.tagName === 'SUMMARY' ? String([...document.querySelectorAll('summary')].indexOf(document.activeElement)) : null",
      );
      if (here === null || reached.has(here)) continue;
      reached.add(here);
      await page.keyboard.press('Enter');
    }
    expect(reached.size).toBe(folds);
    expect(await page.locator('details[open]').count()).toBe(folds);
    await context.close();
  }, 60_000);

  it('is no wider than a narrow screen', async () => {
    const { context, page } = await open(fullReport);
    await page.setViewportSize({ width: 360, height: 700 });
    expect(await page.evaluate('document.documentElement.scrollWidth')).toBeLessThanOrEqual(360);
    await context.close();
  });

  it('draws every plot inside its frame', async () => {
    const { context, page } = await open(fullReport);
    const outside = await page.evaluate(`[...document.querySelectorAll('svg.plot')].flatMap((plot) => {
      const frame = plot.getBoundingClientRect();
      return [...plot.querySelectorAll('text,rect,circle')]
        .filter((one) => {
          const box = one.getBoundingClientRect();
          return box.left < frame.left - 1 || box.right > frame.right + 1 || box.top < frame.top - 1 || box.bottom > frame.bottom + 1;
        })
        .map((one) => plot.getAttribute('aria-label').slice(0, 40) + ': ' + one.textContent);
    })`);
    expect(outside).toEqual([]);
    const shots = process.env.MORTISE_SCREENSHOTS;
    if (shots !== undefined) await page.screenshot({ path: shots, fullPage: true });
    await context.close();
  });

  it('prints with every fold open', async () => {
    const { context, page } = await open(fullReport);
    await page.emulateMedia({ media: 'print' });
    const hidden = await page.evaluate(
      "[...document.querySelectorAll('details > p')].filter((one) => one.getBoundingClientRect().height === 0).length",
    );
    expect(hidden).toBe(0);
    await context.close();
  });

  it('of 10,000 findings opens, and scrolls to its end', async () => {
    const [finding] = fullReport.findings;
    const findings = Array.from(
      { length: 10_000 },
      (_, index): Finding => ({ ...finding!, says: `${finding!.says} Number ${index}.` }),
    );
    const many = { ...fullReport, findings };
    const file = join(mkdtempSync(join(tmpdir(), 'mortise-html-')), 'many.html');
    writeFileSync(file, reportHtml(many));
    expect(statSync(file).size).toBeLessThan(30e6);
    const { context, page } = await open(many);
    await page.keyboard.press('End');
    await page.waitForFunction('scrollY + innerHeight > document.documentElement.scrollHeight - 400', null, {
      timeout: 20_000,
    });
    await context.close();
  }, 60_000);
});
