import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { madeSuite } from './made-suite.mjs';
import { axisTitles, captionOf, labelBoxes, panelsOf, rowsOf, unitsOf } from './reading-specs';

const { diagrams } = ww;
const folder = mkdtempSync(join(tmpdir(), 'wedgework-diagrams-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** PNG width and height: bytes 16 to 23 of the file (W3C PNG specification, IHDR). */
const sizeOf = (png: Uint8Array) => [Buffer.from(png).readUInt32BE(16), Buffer.from(png).readUInt32BE(20)];
const nasty = '<img src=x onerror=alert(1)>"\'&</script><script>alert(2)</script>';

describe('a drawn diagram', () => {
  const suite = madeSuite(ww, { samples: 40, groups: 3 });

  it('is the same bytes each time, and two pixels to one of the page', async () => {
    const [first, second] = [diagrams.tas(suite, { group: 'volcano' }), diagrams.tas(suite, { group: 'volcano' })];
    const png = await first.png();
    await diagrams.afm(suite).png();
    expect(Buffer.from(await second.png()).equals(Buffer.from(png))).toBe(true);
    expect(await first.svg()).toBe(await second.svg());
    const [width] = sizeOf(png);
    const [single] = sizeOf(await first.png({ scale: 1 }));
    expect(Math.abs(width - 2 * single)).toBeLessThanOrEqual(2);
  });

  it('shows itself as Vega-Lite 5, PNG and text, and nothing else', async () => {
    const diagram = diagrams.tas(suite, { group: 'volcano' });
    const bundle = await diagram.toMimeBundle();
    expect(Object.keys(bundle)).toEqual(['application/vnd.vegalite.v5+json', 'image/png', 'text/plain']);
    expect(
      Buffer.from(bundle['image/png'] as string, 'base64')
        .subarray(1, 4)
        .toString(),
    ).toBe('PNG');
    expect(bundle['text/plain']).toMatch(/^Total alkali–silica.*38 samples plotted|^Total alkali.*plotted/);
    expect(JSON.parse(JSON.stringify(diagram)).spec.$schema).toContain('vega-lite/v5');
  });

  it('sends the picture alone when the specification would be too large for a notebook', async () => {
    const big = { ...(diagrams.tas(suite).spec as object), usermeta: 'x'.repeat(1_100_000) };
    const bundle = await diagrams.diagramOf({ ...diagrams.tas(suite), spec: big }).toMimeBundle();
    expect(Object.keys(bundle)).toEqual(['image/png', 'text/plain']);
  });

  it('reads nothing from outside', async () => {
    const spec = {
      $schema: 'https://vega.github.io/schema/vega-lite/v5.json',
      data: { url: 'https://example.org/x.csv' },
      mark: 'point',
      encoding: {},
    };
    const diagram = diagrams.diagramOf({ name: 'x', spec, lineage: [], counts: { plotted: 0, notPlotted: 0, reasons: {} }, description: 'x' });
    expect(await diagram.svg()).not.toContain('example.org');
  });
});

describe('saved files', () => {
  const suite = ww.suiteOf({
    columns: ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MgO', 'CaO', 'Na2O', 'K2O'].map((symbol, k) =>
      ww.column({ symbol, values: [[50, 1, 18, 9, 7, 11, 3, 1][k], [60, 0.7, 17, 6, 3, 6, 4, 2][k]] }),
    ),
    labels: { sample: [nasty, 'plain'], volcano: [nasty, 'Ketu'] },
  });
  const diagram = diagrams.tas(suite, { group: 'volcano', title: nasty, names: 'all' });

  it('are SVG with text as text, escaped', async () => {
    const path = join(folder, 'deep', 'tas.svg');
    await diagrams.saveSvg(diagram, path);
    const svg = readFileSync(path, 'utf8');
    expect(svg).toMatch(/^<svg[^>]* width="\d/);
    expect(svg).toContain('SiO₂ (wt %, volatile-free)');
    expect(svg).not.toMatch(/<img|<script/i);
    expect(readdirSync(join(folder, 'deep'))).toEqual(['tas.svg']);
  });

  it('are PNG, larger by default for print', async () => {
    const path = join(folder, 'tas.png');
    await diagrams.savePng(diagram, path);
    expect(sizeOf(readFileSync(path))[0]).toBeGreaterThan(1.9 * sizeOf(await diagram.png())[0]);
  });

  it('are PDF with vectors and the font embedded, the same bytes each time', async () => {
    const path = join(folder, 'tas.pdf');
    await diagrams.savePdf(diagram, path);
    const pdf = readFileSync(path);
    const text = pdf.toString('latin1');
    expect(text.slice(0, 5)).toBe('%PDF-');
    expect(text).toContain('/FontFile2');
    expect(text).toMatch(/SourceSans3/);
    expect(text).not.toContain('/Subtype /Image');
    await diagrams.savePdf(diagram, path);
    expect(readFileSync(path).equals(pdf)).toBe(true);
  });

  it('are one HTML page that connects to nothing, with every text escaped', async () => {
    const path = join(folder, 'tas.html');
    await diagrams.saveHtml(diagram, path);
    const page = readFileSync(path, 'utf8');
    expect(page).toContain("default-src 'none'");
    expect(page).not.toMatch(/<(script|link|img|iframe)[^>]+(src|href)=/i);
    expect(page).not.toContain('<img src=x');
    // Two scripts of ours open and close; nothing a sample is called opens or closes another.
    expect(page.match(/<script/gi)).toHaveLength(2);
    expect(page.match(/<\/script/gi)).toHaveLength(2);
    // Without its scripts it still holds the picture.
    expect(page).toMatch(/<div id="diagram"[^>]*><svg/);
  });

  it.each([
    ['no diagram', () => diagrams.saveSvg({} as never, join(folder, 'x.svg')), /saveSvg: the first argument must be a diagram/],
    ['no path', () => diagrams.savePng(diagram, ''), /savePng: the second argument must be a file path/],
    ['another ending', () => diagrams.savePdf(diagram, join(folder, 'x.png')), /must end in \.pdf/],
    ['a bad scale', () => diagrams.savePng(diagram, join(folder, 'y.png'), { scale: -1 }), /scale must be a number above 0/],
  ])('%s: one clear error', async (_, save, message) => {
    await expect(save()).rejects.toThrow(message);
  });
});

describe("a scheme of the user's own", () => {
  it('is drawn like any other, from its file alone', () => {
    const path = join(folder, 'my-scheme.json');
    writeFileSync(
      path,
      JSON.stringify({
        key: 'my-magnesia',
        title: 'Magnesia against lime',
        kind: 'polygons',
        sources: ['field notes'],
        basis: 'as-analysed',
        axes: [
          { expression: 'MgO', title: 'MgO', unit: 'wt %' },
          { expression: 'CaO', title: 'CaO', unit: 'wt %' },
        ],
        frame: { x: [0, 20], y: [0, 20] },
        fields: [
          {
            symbol: 'lo',
            name: 'low magnesia',
            vertices: [
              [0, 0],
              [5, 0],
              [5, 20],
              [0, 20],
            ],
          },
          {
            symbol: 'hi',
            name: 'high magnesia',
            vertices: [
              [5, 0],
              [20, 0],
              [20, 20],
              [5, 20],
            ],
          },
        ],
        standing: 'from memory',
      }),
    );
    const own = ww.schemes.load(path);
    const diagram = diagrams.scheme(madeSuite(ww, { samples: 30, groups: 2 }), own, { group: 'volcano', window: 'whole' });
    const [panel] = panelsOf(diagram.spec);
    expect(axisTitles(panel)).toEqual({ x: 'MgO (wt %)', y: 'CaO (wt %)' });
    expect(
      labelBoxes(panel)
        .map(({ text }) => text.replace(/\s+/g, ' '))
        .sort(),
    ).toEqual(['high magnesia', 'low magnesia']);
    // The one real boundary; the outer frame is no boundary.
    expect(
      unitsOf(panel)
        .filter(({ mark }) => mark.type === 'rule')
        .flatMap(rowsOf),
    ).toMatchObject([{ x: 5, x2: 5 }]);
    expect(captionOf(diagram.spec)).toContain('Boundaries: field notes.');
  });
});
