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

/** Marks that a specification asks for, whatever it is made of: rows of the data of every drawn unit. */
async function drawn(notebook: LabNotebook) {
  await notebook.page.waitForTimeout(500);
  return notebook.page.evaluate(() =>
    [...document.querySelectorAll('.jp-OutputArea-output .vega-embed')].map((element) => {
      const canvas = element.querySelector('canvas');
      const marks = element.querySelectorAll('svg .mark-symbol path, svg .mark-rule line, svg .mark-line path').length;
      // Ink on a canvas: pixels that are not the ground.
      const pixels = canvas?.getContext('2d')?.getImageData(0, 0, canvas.width, canvas.height).data;
      let ink = 0;
      for (let i = 0; pixels !== undefined && i < pixels.length; i += 4) if (pixels[i] + pixels[i + 1] + pixels[i + 2] < 600 && pixels[i + 3] > 0) ink++;
      return { marks, ink, width: element.clientWidth, height: element.clientHeight };
    }),
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
    expect(pictures).toHaveLength(figureSpecs(cells).length);
    for (const { ink, marks, width } of pictures) {
      expect(ink + marks).toBeGreaterThan(100);
      expect(width).toBeGreaterThan(300);
    }
    await notebook.close();
  });
});
