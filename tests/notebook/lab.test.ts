/// <reference lib="dom" />
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gallery, Lab, type Cell, type LabNotebook } from './lab';

const vegaLite = 'application/vnd.vegalite.v5+json';
const progressType = 'application/vnd.wedgework.progress+json';

let lab: Lab;
beforeAll(async () => {
  lab = await Lab.start();
});
afterAll(async () => {
  await lab?.end();
});

const outputs = (cells: readonly Cell[]) => cells.flatMap((cell) => cell.outputs ?? []);
const figureSpecs = (cells: readonly Cell[]) => outputs(cells).flatMap(({ data }) => (data?.[vegaLite] === undefined ? [] : [data[vegaLite]]));

interface Unit {
  readonly mark?: { readonly type: string };
  readonly data?: { readonly values?: readonly unknown[] };
  readonly layer?: readonly Unit[];
  readonly concat?: readonly Unit[];
}

/** Units that draw something, wherever they stand in a specification. */
const unitsOf = (spec: Unit): readonly Unit[] => (spec.concat ?? spec.layer)?.flatMap(unitsOf) ?? [spec];

/** How many markers a specification asks for: the rows of its point units. */
const markersAsked = (spec: unknown): number =>
  unitsOf(spec as Unit).reduce((sum, { mark, data }) => sum + (mark?.type === 'point' ? (data?.values?.length ?? 0) : 0), 0);

/** Every drawn diagram, with its markers counted one by one (those of the legend left out), and its other marks. */
async function drawn(notebook: LabNotebook) {
  await notebook.page.waitForTimeout(500);
  return notebook.page.evaluate(() =>
    Array.from(document.querySelectorAll('.jp-OutputArea-output .vega-embed')).map((element) => ({
      markers: element.querySelectorAll('svg .mark-symbol.role-mark > path').length,
      others: element.querySelectorAll('svg .role-mark > path, svg .role-mark > line, svg .role-mark > text').length,
      width: element.clientWidth,
      height: element.clientHeight,
    })),
  );
}

describe.each([...gallery, 'figures.ipynb'])('%s in JupyterLab', (name) => {
  it('runs from top to bottom and draws every diagram', async () => {
    const notebook = await lab.open(name);
    await notebook.command('notebook:run-all-cells');
    const cells = await notebook.cells();
    await notebook.screenshot(`lab-${name}`);
    expect(outputs(cells).filter(({ output_type }) => output_type === 'error')).toEqual([]);
    const ran = cells.filter(({ cell_type, source }) => cell_type === 'code' && String(source).trim() !== '');
    expect(ran.map(({ execution_count }) => execution_count)).toEqual(ran.map((_, i) => i + 1));
    expect(outputs(cells).some(({ data }) => progressType in (data ?? {}) && /left/.test(String(data!['text/plain'])))).toBe(false);
    const pictures = await drawn(notebook);
    expect(pictures.length).toBeGreaterThan(0);
    expect(pictures).toHaveLength(figureSpecs(cells).length);
    figureSpecs(cells).forEach((spec, i) => {
      expect(pictures[i].markers, `figure ${i + 1}`).toBe(markersAsked(spec));
      expect(pictures[i].markers + pictures[i].others, `figure ${i + 1}`).toBeGreaterThan(5);
      expect(pictures[i].width).toBeGreaterThan(300);
    });
    await notebook.close();
  });
});

describe('a diagram in JupyterLab', () => {
  it('tells the sample under the pointer, and stays legible in the dark theme', async () => {
    const notebook = await lab.open('figures.ipynb');
    const { page } = notebook;
    await notebook.command('notebook:run-all-cells');
    const figure = page.locator('.jp-OutputArea-output .vega-embed svg').first();
    await figure.scrollIntoViewIfNeeded();
    await page.waitForTimeout(500);
    await figure.locator('.mark-symbol.role-mark > path').first().hover({ force: true });
    const tooltip = page.locator('#vg-tooltip-element.visible');
    await tooltip.waitFor({ timeout: 5_000 });
    expect(await tooltip.innerText()).toMatch(/KE-\d+/);
    expect(await tooltip.innerText()).toContain('Ketu');
    await notebook.screenshot('lab-hover');

    await notebook.command('apputils:change-theme', { theme: 'JupyterLab Dark' });
    await page.waitForTimeout(1_000);
    await figure.scrollIntoViewIfNeeded();
    await notebook.screenshot('lab-dark');
    // The figure brings its own white ground.
    expect(await figure.evaluate((element) => getComputedStyle(element).backgroundColor)).toBe('rgb(255, 255, 255)');
    await notebook.command('apputils:change-theme', { theme: 'JupyterLab Light' });
    await notebook.close();
  });
});

describe('a working session in JupyterLab', () => {
  it('shows a traceback in the own lines, stops a loop, keeps variables, completes with our words', async () => {
    const notebook = await lab.open('live.ipynb');
    const { page } = notebook;
    const run = async (index: number) => {
      await notebook.select(index);
      await notebook.command('notebook:run-cell');
      return (await notebook.cells())[index];
    };
    await run(1);
    const error = (await run(2)).outputs!.at(-1)!;
    expect(error).toMatchObject({ output_type: 'error', ename: 'RangeError' });
    const shown = page.locator('.jp-RenderedText[data-mime-type="application/vnd.jupyter.stderr"], .jp-RenderedText[data-mime-type="application/vnd.jupyter.error"]').first();
    expect(await shown.innerText()).toMatch(/RangeError[^]*line 2:[^]*column\('Xy'\)/);
    await notebook.screenshot('lab-error');

    await notebook.select(3);
    const looping = notebook.command('notebook:run-cell').catch(() => {});
    await page.waitForTimeout(1_000);
    const asked = Date.now();
    await notebook.interrupt();
    await looping;
    expect(Date.now() - asked).toBeLessThan(2_000);
    expect((await notebook.cells())[3].outputs!.at(-1)).toMatchObject({ output_type: 'error', ename: 'Interrupted' });
    expect((await run(4)).outputs![0].data!['text/plain']).toBe('42');

    await notebook.select(5);
    await notebook.command('notebook:enter-edit-mode');
    await page.locator('.jp-Notebook .jp-Cell').nth(5).locator('.cm-content').click();
    await page.keyboard.type('ww.molar');
    await notebook.command('completer:invoke-notebook');
    const popup = page.locator('.jp-Completer');
    await popup.waitFor({ timeout: 10_000 });
    expect(await popup.innerText()).toContain('molarMass');
    await page.locator('.jp-Completer-docpanel').waitFor({ timeout: 10_000 });
    expect(await page.locator('.jp-Completer-docpanel').innerText()).toContain('Molar mass');
    await notebook.screenshot('lab-completion');

    await page.keyboard.press('Escape');
    await page.keyboard.type('Mass(');
    await notebook.command('tooltip:launch-notebook');
    const words = page.locator('.jp-Tooltip');
    await words.waitFor({ timeout: 10_000 });
    expect(await words.innerText()).toMatch(/molarMass\(symbol: string\): number[^]*Molar mass of an oxide/);
    await notebook.screenshot('lab-tooltip');
    await notebook.close();
  });
});
