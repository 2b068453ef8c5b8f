import fc from 'fast-check';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { batchMelt, fractionalMelt, mantleMode, melt, pooledFractionalMelt } from 'wedgework';
import { meltByExtraction, meltingStages } from '../../kernel-lib/models/melting-stages';
import { equationValues } from './equation-values';

const cases = JSON.parse(readFileSync(join(__dirname, '../data/models/closed-forms.json'), 'utf8')) as { key: string; inputs: any; expected: any }[];
const byKey = (key: string) => cases.find((each) => each.key === key)!;
const last = (values: Float64Array) => values[values.length - 1];
/** A rock of two minerals that has the wanted bulk coefficients before melting (D0) and in the melting reaction (P). */
const rock = (D0: number, P: number) => ({ mode: { a: 0.5, b: 0.5 }, reaction: { a: 0.6, b: 0.4 }, coefficients: solve(D0, P) });
function solve(D0: number, P: number) {
  // 0.5 ka + 0.5 kb = D0; 0.6 ka + 0.4 kb = P
  const ka = (P - 0.8 * D0) / 0.2;
  return { a: { Ba: ka }, b: { Ba: 2 * D0 - ka } };
}

describe('melt', () => {
  it('agrees with the closed forms over a grid of D and F', () => {
    for (const row of byKey('model-grid-rayleigh-batch').expected) {
      const options = { source: { Ba: 1 }, mode: { a: 1 }, coefficients: { a: { Ba: row.D } }, upTo: row.F, steps: 3 };
      expect(last(melt({ ...options }).liquid.values('Ba')) / row.batch_melt).toBeCloseTo(1, 9);
      expect(last(melt({ ...options, process: 'pooled' }).liquid.values('Ba')) / row.fractional_melt_agg).toBeCloseTo(1, 9);
      const instant = last(melt({ ...options, process: 'fractional' }).liquid.values('Ba'));
      if (row.fractional_melt_inst > 1e-100) expect(instant / row.fractional_melt_inst).toBeCloseTo(1, 6);
      else expect(instant).toBeLessThan(1e-90);
    }
  });

  it('agrees with the table of equation values', () => {
    for (const { inputs, value } of equationValues('batch non-modal'))
      expect(Number(batchMelt(inputs.D0, inputs.P, inputs.F).toPrecision(6))).toBe(value);
    for (const { inputs, value } of equationValues('fractional non-modal inst'))
      expect(Number(fractionalMelt(inputs.D0, inputs.P, inputs.F).toPrecision(6))).toBe(value);
    for (const { inputs, value } of equationValues('fractional non-modal aggregated'))
      expect(Number(pooledFractionalMelt(inputs.D0, inputs.P, inputs.F).toPrecision(6))).toBe(value);
    for (const kind of ['inst', 'aggregated'] as const) {
      for (const { inputs, value } of equationValues(`dynamic melting ${kind} (modal)`)) {
        const { X, D, phi } = inputs;
        const path = melt({
          source: { Ba: 1 },
          mode: { a: 1 },
          coefficients: { a: { Ba: D } },
          process: kind === 'inst' ? 'dynamic' : 'pooled',
          retained: phi,
          upTo: phi + X * (1 - phi),
          steps: 2,
        });
        expect(Number(last(path.liquid.values('Ba')).toPrecision(6))).toBe(value); // Zou 1998
      }
    }
  });

  it('agrees with Shaw’s non-modal closed forms while no mineral runs out', () => {
    for (const [D0, P] of [
      [0.05, 0.052],
      [0.5, 0.52],
      [0.2, 0.19],
    ]) {
      const options = { source: { Ba: 1 }, ...rock(D0, P), upTo: 0.3, steps: 6 };
      const [batch, fractional, pooled] = (['batch', 'fractional', 'pooled'] as const).map((process) => melt({ ...options, process }));
      batch.F.forEach((F, i) => {
        expect(batch.liquid.values('Ba')[i] / batchMelt(D0, P, F)).toBeCloseTo(1, 9);
        expect(fractional.liquid.values('Ba')[i] / fractionalMelt(D0, P, F)).toBeCloseTo(1, 9);
        expect(pooled.liquid.values('Ba')[i] / pooledFractionalMelt(D0, P, F)).toBeCloseTo(1, 9);
      });
    }
  });

  it('gives the printed bulk coefficients of a worked example', () => {
    const { inputs, expected } = byKey('model-imperial-bulkD'); // Imperial College London, High-Temperature Geochemistry practicals
    const names = { ol: 'olivine', opx: 'orthopyroxene', cpx: 'clinopyroxene', sp: 'spinel', gn: 'garnet', plag: 'plagioclase' } as Record<
      string,
      string
    >;
    const long = (record: Record<string, number>) => Object.fromEntries(Object.entries(record).map(([short, value]) => [names[short], value]));
    const K = { Rb: long(inputs.KD_mineral_melt.Rb), Sm: long(inputs.KD_mineral_melt.Sm) };
    const coefficients = Object.fromEntries(Object.values(names).map((mineral) => [mineral, { Rb: K.Rb[mineral], Sm: K.Sm[mineral] }]));
    for (const [facies, mode] of [
      ['spinel', inputs.spinel_peridotite_wt],
      ['garnet', inputs.garnet_peridotite_wt],
    ] as const) {
      // The first drop of melt has C0/D.
      const path = melt({ source: { Rb: 1, Sm: 1 }, mode: long(mode), coefficients, upTo: 0.1, startAt: 0, steps: 1 });
      expect(Number((1 / path.liquid.values('Rb')[0]).toPrecision(2))).toBe(expected[`D_Rb_${facies}`]);
      expect(Number((1 / path.liquid.values('Sm')[0]).toPrecision(2))).toBe(expected[`D_Sm_${facies}`]);
    }
  });

  it('agrees with stepwise integration through minerals that run out and melt that is retained', () => {
    const masses = Float64Array.of(0.55, 0.25, 0.2);
    const reaction = Float64Array.of(-0.2, 0.4, 0.8);
    const K = [0.01, 0.05, 0.4];
    for (const retained of [0, 0.02]) {
      const stages = meltingStages(masses, reaction, 0.4);
      expect(stages[0].to).toBeCloseTo(0.25, 12); // the third mineral is used up at 0.2/0.8
      const [exact] = meltByExtraction(stages, K, retained, [0.4]);
      let [w, left, extracted, F] = [Array.from(masses), 1, 0, retained];
      w = w.map((mass, m) => mass - reaction[m] * retained);
      const steps = 400_000;
      const dF = (0.4 - retained) / steps;
      let C = 0;
      for (let i = 0; i < steps; i++) {
        const stage = stages.find((each) => F < each.to - 1e-12)!;
        const hold = w.reduce((sum, mass, m) => sum + mass * K[m], 0) + (retained / (1 - retained)) * (1 - F);
        C = left / hold;
        const dX = dF / (1 - retained);
        left -= C * dX;
        extracted += dX;
        w = w.map((mass, m) => Math.max(0, mass - stage.reaction[m] * dF));
        F += dF;
      }
      expect(exact.pooled / ((1 - left) / extracted)).toBeCloseTo(1, 3);
      expect(exact.liquid / C).toBeCloseTo(1, 2);
    }
  });

  it('conserves mass: source = melt + residue', () => {
    const K = fc.double({ min: 1e-3, max: 5, noNaN: true });
    fc.assert(
      fc.property(
        K,
        K,
        fc.double({ min: 0.05, max: 0.9, noNaN: true }),
        fc.constantFrom('batch' as const, 'pooled' as const),
        (ka, kb, upTo, process) => {
          const path = melt({
            source: { Ba: 5 },
            mode: { a: 0.7, b: 0.3 },
            reaction: { a: 0.3, b: 0.7 },
            coefficients: { a: { Ba: ka }, b: { Ba: kb } },
            process,
            upTo,
            steps: 9,
          });
          path.F.forEach((F, i) => expect((F * path.liquid.values('Ba')[i] + (1 - F) * path.solid!.values('Ba')[i]) / 5).toBeCloseTo(1, 9));
        },
      ),
      { seed: 6, numRuns: 100 },
    );
  });

  it('takes modes, reactions and sources from the tables and says where a mineral is used up', () => {
    const path = melt({
      source: 'primitive-mantle-1989',
      mode: mantleMode('mode', 'workman_hart_2005'),
      reaction: mantleMode('melting reaction', 'wasylenki_2003'),
      process: 'pooled',
      upTo: 0.25,
      analytes: ['La', 'Sm', 'Yb'],
    });
    expect(path.notes.join(' ')).toMatch(/clinopyroxene at F = 0\.1769/); // 0.13 / (0.72/0.98)
    expect(path.lineage.at(-1)!.sources).toEqual(expect.arrayContaining(['workman_hart_2005', 'wasylenki_2003', 'shaw_1970']));
    expect(last(path.liquid.values('La')) / last(path.liquid.values('Yb'))).toBeGreaterThan(1);
  });

  it('pools facies by their shares', () => {
    const coefficients = { a: { Ba: 0.1 }, b: { Ba: 0.5 } };
    const of = (mode: Record<string, number>) => melt({ source: { Ba: 1 }, mode, coefficients, upTo: 0.1, steps: 2 }).liquid.values('Ba');
    const both = melt({
      source: { Ba: 1 },
      facies: [
        { mode: { a: 1 }, share: 0.25 },
        { mode: { b: 1 }, share: 0.75 },
      ],
      coefficients,
      upTo: 0.1,
      steps: 2,
    }).liquid.values('Ba');
    both.forEach((value, i) => expect(value).toBeCloseTo(0.25 * of({ a: 1 })[i] + 0.75 * of({ b: 1 })[i], 12));
  });

  it('refuses bad arguments by name', () => {
    const good = { source: { Ba: 1 }, mode: { a: 1 }, coefficients: { a: { Ba: 0.1 } }, upTo: 0.1 };
    expect(() => melt({ ...good, upTo: 0 })).toThrow(/upTo is 0/);
    expect(() => melt({ ...good, process: 'dynamic' })).toThrow(/needs retained/);
    expect(() => melt({ ...good, reaction: { a: 0.4 } })).toThrow(/sums to 0.4/);
    expect(() => melt({ ...good, reaction: { b: 1 } })).toThrow(/consumes b/);
    expect(() => melt({ ...good, source: 'nowhere' })).toThrow(/no reservoir "nowhere"/);
    expect(() => melt({ ...good, facies: [] })).toThrow(/either mode/);
  });
});
