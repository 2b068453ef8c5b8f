import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { chromium as browserType, type Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { built } from '../kernel/engine';
import { chromium, pictures, root } from './environment';

const load = createRequire(__filename);
const { runNotebook } = load(join(built, 'index.js')) as typeof import('../../kernel-lib');
const axe = readFileSync(load.resolve('axe-core/axe.min.js'), 'utf8');
const folder = mkdtempSync(join(tmpdir(), 'wedgework-pages-'));
let browser: Browser;

beforeAll(async () => {
  browser = await browserType.launch({
    executablePath: chromium,
    args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--disable-background-networking', '--disable-component-update', '--disable-sync', '--no-first-run'],
  });
  await runNotebook(join(root, 'notebooks/01-named-suite.ipynb'), { out: join(folder, 'suite.ipynb'), html: join(folder, 'page.html'), report: join(folder, 'report.html'), scratch: folder });
});
afterAll(async () => {
  await browser.close();
  rmSync(folder, { recursive: true, force: true });
});

describe.each(['report.html', 'page.html'])('%s of the first notebook', (name) => {
  it('opens from disk with no network, no console error, and passes the accessibility scan', async () => {
    const context = await browser.newContext({ offline: true, bypassCSP: true, viewport: { width: 1200, height: 900 } });
    const page = await context.newPage();
    const complaints: string[] = [];
    page.on('console', (message) => {
      if (message.type() === 'error') complaints.push(message.text());
    });
    page.on('pageerror', (error) => complaints.push(error.message));
    page.on('request', (request) => {
      if (!/^(file|data):/.test(request.url())) complaints.push(`asks for ${request.url()}`);
    });
    await page.goto(pathToFileURL(join(folder, name)).href);
    await page.screenshot({ path: join(pictures, `${name}.png`), fullPage: false });
    await page.evaluate(axe);
    const { violations } = (await page.evaluate('axe.run()')) as { violations: { id: string; help: string; nodes: { html: string }[] }[] };
    expect(violations.map(({ id, help, nodes }) => `${id}: ${help} (${nodes.length}, e.g. ${nodes[0].html.slice(0, 160)})`)).toEqual([]);
    expect(complaints).toEqual([]);
    await context.close();
  });
});
