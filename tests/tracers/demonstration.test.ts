import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

const data = join(__dirname, '..', '..', 'notebooks', 'data');
interface Truth {
  readonly volcanoes: Readonly<Record<string, { readonly F: number; readonly x: number; readonly y: number }>>;
  readonly model: Readonly<Record<'mantle' | 'fluid' | 'sediment' | 'residue', Readonly<Record<string, number>>>>;
}

describe('the invented arc', () => {
  it('gives back what was put into it: melt fraction, fluid and sediment by volcano', async () => {
    const truth = JSON.parse(readFileSync(join(data, 'oruvai-arc-truth.json'), 'utf8')) as Truth;
    const { suite } = await ww.readAssays(join(data, 'oruvai-arc.xlsx'));
    const volcanoes = Object.keys(truth.volcanoes);
    const basalts = suite.where({ volcano: volcanoes, MgO: { from: 6.5 }, LOI: { to: 3 } });
    const elements = ww.wedgeElements.filter((element) => element !== 'Ti');
    const pick = (from: Readonly<Record<string, number>>) => Object.fromEntries(elements.map((element) => [element, from[element]]));
    const { mantle, fluid, sediment, residue } = truth.model;
    const endMembers = ww.wedgeEndMembers({
      elements,
      mantle: pick(mantle),
      fluid: pick(fluid),
      sedimentMelt: pick(sediment),
      mantleCoefficients: pick(residue),
    });
    const { fits } = await ww.fitFluxedWedge(basalts, { group: 'volcano', endMembers, fixed: { priorMelt: 0 }, draws: 100 });
    for (const { name, parameters, chiSquare, degreesOfFreedom } of fits) {
      const { F, x, y } = truth.volcanoes[name];
      expect(chiSquare / degreesOfFreedom, name).toBeLessThan(2);
      // These basalts hold 6.5–7.7 % MgO, their parents 7.7 %: up to a fifth has crystallised, which the fit reads as less melting and, in
      // proportion, as less fluid. Nothing but that may move them.
      expect(parameters.melt.value / F, `${name} melt`).toBeGreaterThan(0.8);
      expect(parameters.melt.value / F, `${name} melt`).toBeLessThan(1.02);
      expect(parameters.fluid.value / parameters.melt.value / (x / F), `${name} fluid over melt`).toBeGreaterThan(0.9);
      expect(parameters.fluid.value / parameters.melt.value / (x / F), `${name} fluid over melt`).toBeLessThan(1.12);
      expect(parameters.sediment.low, `${name} sediment`).toBeLessThan(y);
      expect(parameters.sediment.high * 1.05, `${name} sediment`).toBeGreaterThan(y);
    }
    const along = (name: ww.WedgeParameterName) => volcanoes.map((volcano) => fits.find((fit) => fit.name === volcano)!.parameters[name].value);
    const rises = (values: readonly number[]) => values.every((value, i) => i === 0 || value > values[i - 1]);
    expect(rises(along('sediment'))).toBe(true);
    expect(rises(along('fluid').reverse())).toBe(true);
    expect(rises(along('melt').reverse())).toBe(true);
  });

  it('shows its slab signal in ratios and shares: fluid at the front, none of it in Zr', async () => {
    const { suite } = await ww.readAssays(join(data, 'oruvai-arc.xlsx'));
    const lavas = suite.where({ volcano: ['Ketu', 'Ondrik'] });
    const { columns } = ww.ratios(lavas, ['Ba/Th']);
    const middle = (volcano: string) => {
      const values = [...columns.get('Ba/Th')!.values].filter((_, i) => lavas.label('volcano')[i] === volcano).sort((a, b) => a - b);
      return values[Math.floor(values.length / 2)];
    };
    expect(middle('Ketu')).toBeGreaterThan(3 * middle('Ondrik'));
    const { groups, elements } = ww.slabShares(lavas, { group: 'volcano' });
    for (const { median, sigma } of groups) {
      expect(median[elements.indexOf('Ba')]).toBeGreaterThan(90);
      expect(Math.abs(median[elements.indexOf('Zr')])).toBeLessThan(2 * sigma[elements.indexOf('Zr')]);
    }
  });
});
