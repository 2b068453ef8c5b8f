import { describe, expect, it } from 'vitest';
import { column, diagrams, schemes, shortSource, suiteOf } from 'wedgework';
import { axisTitles, captionOf, labelBoxes, panelsOf, rowsOf, unitsOf, type Spec } from '../diagrams/reading-specs';
import { madeSuite } from '../diagrams/made-suite.mjs';

const ww = { suiteOf, column } as never;
const suite = madeSuite(ww, { samples: 40, groups: 3 });
const uncertainty = { SiO2: { relative: 0.01 }, Na2O: { relative: 0.03 }, K2O: { relative: 0.03 }, FeOT: { relative: 0.02 }, Zr: { relative: 0.05 } };

describe('the diagram of every scheme, from its file alone', () => {
  for (const scheme of schemes.list().schemes) {
    it(`${scheme.key}: axis titles, units, basis, source, counts; names clear of each other`, () => {
      const { spec, counts } = diagrams.scheme(suite, scheme.key, { group: 'volcano', window: 'whole' });
      const [panel] = panelsOf(spec as Spec);
      const caption = captionOf(spec as Spec);
      const texts = JSON.stringify(spec);
      if (scheme.plane === 'rectangular') {
        const titles = axisTitles(panel);
        for (const [side, axis] of [
          ['x', scheme.axes[0]],
          ['y', scheme.axes[1]],
        ] as const) {
          // Figures that the shipped font lacks are drawn as it can (N in place of ₙ), so only letters and digits are compared.
          const plain = (text: string) => text.replace(/[^A-Za-z]/g, '');
          expect(plain(titles[side])).toContain(plain(axis.title).slice(0, 6));
          if (axis.unit !== '') expect(titles[side]).toContain(axis.unit);
          if (scheme.basis === 'volatile-free' && axis.unit === 'wt %') expect(titles[side]).toContain('volatile-free');
        }
      } else for (const axis of scheme.axes) expect(texts).toContain(axis.title);
      for (const source of scheme.sources) expect(caption).toContain(shortSource(source));
      if (scheme.basis === 'volatile-free') expect(caption).toMatch(/free of volatiles, iron as measured/);
      expect(caption).toMatch(/\d+ samples? plotted/);
      expect(counts.plotted + counts.notPlotted).toBe(40);
      const boxes = labelBoxes(panel);
      for (const [i, a] of boxes.entries()) {
        for (const b of boxes.slice(i + 1)) {
          const apart = a.right <= b.left || b.right <= a.left || a.bottom <= b.top || b.bottom <= a.top;
          expect(apart, `"${a.text}" and "${b.text}"`).toBe(true);
        }
      }
    });
  }
});

describe('how sure, on a diagram', () => {
  for (const key of ['tas', 'afm', 'affinity-zr-y']) {
    it(`${key}: doubt is shaded along the boundaries`, () => {
      const plain = diagrams.scheme(suite, key, { window: 'whole' });
      const { spec } = diagrams.scheme(suite, key, { window: 'whole', shading: 'doubt', uncertainty });
      const shades = unitsOf(panelsOf(spec as Spec)[0]).filter(({ mark }) => mark.type === 'line' && mark.fillOpacity !== undefined);
      // Five levels, each inside the one before: no later one has more of the frame.
      const extents = shades.map(
        (unit) => Math.max(...rowsOf(unit).map(({ x }) => x ?? -Infinity)) - Math.min(...rowsOf(unit).map(({ x }) => x ?? Infinity)),
      );
      expect(extents.length).toBeGreaterThanOrEqual(3);
      for (const [i, extent] of extents.entries()) if (i > 0) expect(extent).toBeLessThanOrEqual(extents[i - 1] + 1e-6);
      expect(captionOf(spec as Spec)).toContain('Grey: chance of another field');
      expect(JSON.stringify(plain.spec)).not.toContain('fillOpacity":0.13');
    });
  }

  it('bars hold the probabilities of each sample', () => {
    const { spec } = diagrams.probabilityBars(suite, 'tas', { uncertainty });
    const rows = unitsOf(panelsOf(spec as Spec)[0])
      .flatMap(rowsOf)
      .filter(({ g }) => g !== undefined);
    const sums = new Map<string, number>();
    for (const { s, p } of rows) sums.set(s, (sums.get(s) ?? 0) + p);
    for (const sum of sums.values()) expect(sum).toBeCloseTo(100, 0);
    expect(sums.size).toBe(25);
    const [first] = suite.samples;
    expect(
      unitsOf(panelsOf(diagrams.probabilityBars(suite, 'tas', { uncertainty, samples: [first] }).spec as Spec)[0])
        .flatMap(rowsOf)
        .every(({ s }) => s === undefined || s === first),
    ).toBe(true);
  });

  it('says what is lacking', () => {
    expect(() => diagrams.scheme(suite, 'tas', { shading: 'all' as never })).toThrow(/"none" or "doubt"/);
    const bare = suiteOf({ columns: [...suite.columns.values()].map(({ sigma: _sigma, ...each }) => each), labels: suite.labels });
    expect(() => diagrams.scheme(bare, 'tas', { shading: 'doubt' })).toThrow(/needs 1σ/);
    expect(() => diagrams.probabilityBars(bare, 'tas')).toThrow(/no 1σ is known/);
    expect(() => diagrams.probabilityBars(suite, 'tas', { uncertainty, samples: ['nobody'] })).toThrow(/no sample "nobody"/);
  });
});
