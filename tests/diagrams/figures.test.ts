import { Resvg } from '@resvg/resvg-js';
import Ajv from 'ajv';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { beforeAll, describe, expect, it } from 'vitest';
import * as ww from 'wedgework';
import { canDraw } from '../../kernel-lib/diagrams/font';
import { figures } from './gallery-figures.mjs';
import { madeSuite } from './made-suite.mjs';
import { axisTitles, captionOf, drawnSegments, labelBoxes, panelsOf, passesThrough, rowsOf, unitsOf } from './reading-specs';

const { diagrams } = ww;
const gallery = figures(ww);
const made = new Map<string, ww.diagrams.Diagram>();
beforeAll(async () => {
  for (const [name, draw] of Object.entries(gallery)) made.set(name, await draw());
});
const schema = JSON.parse(readFileSync(createRequire(__filename).resolve('vega-lite/build/vega-lite-schema.json'), 'utf8'));
const ajv = new Ajv({ strict: false, allErrors: false, logger: false });
ajv.addFormat('color-hex', true);
ajv.addFormat('uri-reference', true);
const fitsSchema = ajv.compile(schema);

describe('every figure of the gallery', () => {
  it('fits the published JSON schema of Vega-Lite 5, and compiles without a warning', () => {
    expect(fitsSchema({ mark: 'blob', data: { values: [] }, encoding: {} })).toBe(false);
    for (const [name, { spec }] of made) {
      expect(fitsSchema(JSON.parse(JSON.stringify(spec))), `${name}: ${ajv.errorsText(fitsSchema.errors?.slice(-2))}`).toBe(true);
      expect(diagrams.specWarnings(spec), name).toEqual([]);
    }
  });

  it('sets ground and text colours itself, so that a dark front end stays legible', () => {
    for (const [name, { spec }] of made) {
      const config = spec.config as any;
      expect(spec.background, name).toBe('#ffffff');
      for (const colour of [
        config.axis.labelColor,
        config.axis.titleColor,
        config.axis.domainColor,
        config.legend.labelColor,
        config.legend.titleColor,
        config.title.color,
        config.style['guide-label'].fill,
        config.style['guide-title'].fill,
      ]) {
        expect(colour, name).toMatch(/^#[0-5]/);
      }
    }
  });

  it('has a caption that counts its samples, and text that the shipped font can draw', () => {
    for (const [name, { spec, counts }] of made) {
      const caption = captionOf(spec);
      // A figure of draws counts its draws.
      expect(caption, name).toMatch(/plotted|draws/);
      expect(counts.plotted + counts.notPlotted, name).toBeGreaterThanOrEqual(0);
      expect(
        Object.values(counts.reasons).reduce((sum, each) => sum + each, 0),
        name,
      ).toBe(counts.notPlotted);
      const texts = [
        caption,
        ...panelsOf(spec).flatMap((panel) => [
          ...Object.values(axisTitles(panel)),
          ...labelBoxes(panel).map(({ text }) => text.replaceAll('\n', ' ')),
        ]),
      ];
      for (const text of texts) expect(canDraw(text), `${name}: ${text}`).toBe(true);
    }
  });

  it('sets no label on a boundary, on another label, or out of its frame', () => {
    for (const [name, { spec }] of made) {
      for (const panel of panelsOf(spec)) {
        const boxes = labelBoxes(panel);
        const segments = drawnSegments(panel);
        boxes.forEach((box, i) => {
          expect(
            box.left >= -1 && box.right <= panel.width + 1 && box.top >= -1 && box.bottom <= panel.height + 1,
            `${name}: ${box.text} is cut`,
          ).toBe(true);
          for (const segment of segments) expect(passesThrough(segment, box), `${name}: a line runs through ${box.text}`).toBe(false);
          for (const other of boxes.slice(i + 1)) {
            const overlap = box.left < other.right && other.left < box.right && box.top < other.bottom && other.top < box.bottom;
            expect(overlap, `${name}: ${box.text} and ${other.text} overlap`).toBe(false);
          }
        });
      }
    }
  });

  it('cuts no text off at the edge of the picture', async () => {
    for (const name of ['tas-twelve', 'afm-five', 'xy-log', 'spider-five', 'harker-five', 'xy-many', 'tas-small']) {
      const svg = await made.get(name)!.svg();
      const image = new Resvg(svg, {
        background: 'white',
        font: {
          loadSystemFonts: false,
          fontFiles: ['Regular', 'It', 'Semibold'].map((face) => `${__dirname}/../../kernel-lib/assets/fonts/SourceSans3-${face}.ttf`),
        },
      }).render();
      const { width, height, pixels } = image;
      let inked = 0;
      // Text takes ink; the padding all round must have none.
      for (let y = 0; y < height; y++)
        for (let x = 0; x < width; x++) if ((x < 4 || y < 4 || x >= width - 4 || y >= height - 4) && pixels[4 * (y * width + x)] < 250) inked++;
      expect(inked, name).toBe(0);
    }
  });
});

describe('titles, units, bases and sources', () => {
  const suite = madeSuite(ww, { samples: 60, groups: 3 });

  it('stand on the axes and in the caption', () => {
    const cases: [ww.diagrams.Diagram, { x: string; y: string }, RegExp[]][] = [
      [diagrams.tas(suite), { x: 'SiO₂ (wt %, volatile-free)', y: 'Na₂O + K₂O (wt %, volatile-free)' }, [/Le Bas et al\. 1986/, /free of volatiles/]],
      [
        diagrams.potassiumSilica(suite),
        { x: 'SiO₂ (wt %, volatile-free)', y: 'K₂O (wt %, volatile-free)' },
        [/Le Maitre et al\. 2002/, /free of volatiles/],
      ],
      [diagrams.ironEnrichment(suite), { x: 'SiO₂ (wt %, volatile-free)', y: 'FeO* / MgO' }, [/Miyashiro 1974/, /FeO\*: total iron as FeO/]],
      [diagrams.xy(suite, 'SiO2', 'Ba/Th'), { x: 'SiO₂ (wt %)', y: 'Ba/Th' }, []],
      [diagrams.xy(suite, '10000*Zr/TiO2', 'Sr'), { x: '10000 × Zr/TiO₂', y: 'Sr (ppm)' }, []],
      [diagrams.rareEarths(suite), { x: '', y: 'Sample / C1 chondrite' }, [/Sun & McDonough 1989/]],
      [diagrams.spider(suite), { x: '', y: 'Sample / primitive mantle' }, [/Sun & McDonough 1989/, /recommend for plotting/]],
    ];
    for (const [diagram, titles, says] of cases) {
      expect(axisTitles(panelsOf(diagram.spec)[0]), diagram.name).toEqual(titles);
      for (const each of says) expect(captionOf(diagram.spec), diagram.name).toMatch(each);
    }
    expect(captionOf(diagrams.afm(suite).spec)).toMatch(/Irvine & Baragar 1971.*total iron as FeO.*closed to 100 %/s);
  });

  it('keeps the sources and the recalled boundaries in the lineage', () => {
    const { lineage } = diagrams.tas(suite, { also: ['alkalinity'] });
    const last = lineage.at(-1)!;
    expect(last.what).toBe('diagrams.tas');
    expect(last.sources).toEqual(expect.arrayContaining(['le_bas_1986', 'irvine_baragar_1971']));
    for (const key of last.sources) expect(ww.bibliography().has(key)).toBe(true);
  });

  it('recasts once: a suite that is volatile-free already is drawn as it is', () => {
    const dry = ww.volatileFree(suite);
    const points = (from: ww.Suite) =>
      unitsOf(panelsOf(diagrams.tas(from, { iron: 'total-as-FeO' }).spec)[0]).flatMap((unit) =>
        unit.mark.type === 'point' ? rowsOf(unit).map(({ x, y }) => [x, y]) : [],
      );
    expect(points(dry)).toEqual(points(suite));
    expect(points(dry)[0][0]).toBeCloseTo(dry.values('SiO2')[0], 3);
  });

  it('draws the boundaries where they were published', () => {
    const sides = unitsOf(panelsOf(diagrams.tas(suite, { window: 'whole' }).spec)[0])
      .filter(({ mark }) => mark.type === 'rule')
      .flatMap(rowsOf)
      .map(({ x, y, x2, y2 }) => [x, y, x2, y2].join(' '));
    // Le Bas et al. 1986, fig. 2: 63 % silica divides andesite from dacite up to 7 % alkalis; dacite | rhyolite runs from (77, 0) to (69, 8)
    expect(sides.some((side) => side === '63 0 63 7' || side === '63 7 63 0')).toBe(true);
    expect(sides.some((side) => side === '77 0 69 8' || side === '69 8 77 0')).toBe(true);
    expect(new Set(sides).size).toBe(sides.length);
  });
});
