import fc from 'fast-check';
import { fcnnlsVector } from 'ml-fcnnls';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { massBalance, mineralCompositions, solidSolution } from 'wedgework';
import { chooseMineral } from '../../kernel-lib/models/minerals';
import { NonNegativeSolver } from '../../kernel-lib/models/non-negative';
import { daughterOf, noisy, plantedParent, seededDraws } from './planted';

const cases = JSON.parse(readFileSync(join(__dirname, '../data/models/mass-balance.json'), 'utf8')) as { key: string; inputs: any; expected: any }[];
const byKey = (key: string) => cases.find((each) => each.key === key)!;

describe('NonNegativeSolver', () => {
  it('meets the conditions of the minimum, and agrees with an independent solver', () => {
    const number = fc.double({ min: -20, max: 60, noNaN: true });
    fc.assert(
      fc.property(
        fc.array(fc.array(number, { minLength: 6, maxLength: 6 }), { minLength: 10, maxLength: 10 }),
        fc.array(number, { minLength: 10, maxLength: 10 }),
        (rows, target) => {
          const k = 6;
          const gram = new Float64Array(k * k);
          const right = new Float64Array(k);
          for (let a = 0; a < k; a++) {
            rows.forEach((row, i) => (right[a] += row[a] * target[i]));
            for (let b = 0; b < k; b++) rows.forEach((row) => (gram[a * k + b] += row[a] * row[b]));
          }
          const x = new Float64Array(k);
          new NonNegativeSolver(k).solve(gram, right, x, k, k);
          const sumOfSquares = (of: ArrayLike<number>) =>
            rows.reduce((sum, row, i) => sum + (target[i] - row.reduce((fit, value, j) => fit + value * of[j], 0)) ** 2, 0);
          for (let j = 0; j < k; j++) {
            let slope = right[j];
            for (let m = 0; m < k; m++) slope -= gram[j * k + m] * x[m];
            const scale = Math.sqrt(gram[j * k + j]) * 200 + 1e-9;
            expect(x[j]).toBeGreaterThanOrEqual(0);
            expect(slope / scale).toBeLessThan(1e-7);
            if (x[j] > 0) expect(Math.abs(slope) / scale).toBeLessThan(1e-7);
          }
          let independent: number[];
          try {
            independent = fcnnlsVector(rows, target).K.to1DArray();
          } catch {
            return; // it gave up: nothing to compare with
          }
          expect(sumOfSquares(x)).toBeLessThanOrEqual(sumOfSquares(independent) * (1 + 1e-9) + 1e-7);
        },
      ),
      { seed: 6, numRuns: 150 },
    );
  });

  it('leaves out a column that is a combination of others', () => {
    const gram = Float64Array.of(1, 1, 1, 1);
    const x = new Float64Array(2);
    expect(new NonNegativeSolver(2).solve(gram, Float64Array.of(2, 2), x, 2, 2)).toBe(1);
    expect(x[0] + x[1]).toBeCloseTo(2, 12);
  });
});

describe('solidSolution', () => {
  it('agrees with the computed end members of the table', () => {
    let compared = 0;
    for (const { mineral, label, oxides } of mineralCompositions()) {
      const point = solidSolution(mineral, label);
      if (point === undefined) continue;
      compared++;
      for (const [oxide, value] of oxides) expect(Math.abs(value - point.get(oxide)!), `${mineral} ${label} ${oxide}`).toBeLessThan(0.0101);
    }
    expect(compared).toBeGreaterThan(35);
  });

  it('finds every composition of the table by its own label, and by mineral and label', () => {
    for (const { mineral, label } of mineralCompositions()) {
      expect(chooseMineral(mineral, label, 'test')).toMatchObject({ mineral });
      expect(chooseMineral('phase 1', `${mineral} ${label}`, 'test')).toMatchObject({ mineral });
    }
  });

  it('refuses points outside the solid solution', () => {
    expect(() => solidSolution('olivine', 'Fo120')).toThrow(/above 100/);
    expect(() => solidSolution('clinopyroxene', 'Wo50En50Fs50')).toThrow(/do not sum to 100/);
    expect(solidSolution('olivine', 'An50')).toBeUndefined();
  });
});

describe('massBalance', () => {
  it('solves the exact and the rounded published-style cases', () => {
    // Computed independently by ordinary least squares at 40 digits; method of Bryan et al. 1969 and Wright & Doherty 1970.
    const { inputs, expected } = byKey('mb-rounded-synthetic');
    const asMinerals = (it: Record<string, Record<string, number>>) => Object.fromEntries(Object.entries(it).map(([name, oxides]) => [name, oxides]));
    const rounded = massBalance({
      parent: inputs.parent_rounded_0_01,
      daughter: inputs.daughter,
      minerals: asMinerals(inputs.minerals),
      errors: 'equal',
      closure: 'free',
      basis: 'as given',
    });
    expect(rounded.F.value).toBeCloseTo(expected.coefficients.daughter, 4);
    for (const { phase, value } of rounded.phases) expect(value).toBeCloseTo(expected.coefficients[phase], 4);
    expect(rounded.sumOfSquares).toBeCloseTo(expected.sum_of_squares, 6);
    const exact = byKey('mb-exact-synthetic');
    const solved = massBalance({
      parent: exact.inputs.parent,
      daughter: exact.inputs.daughter,
      minerals: asMinerals(exact.inputs.minerals),
      errors: 'equal',
      closure: 'free',
      basis: 'as given',
    });
    expect(solved.F.value).toBeCloseTo(0.55, 4);
    for (const { phase, ofCrystals } of solved.phases) expect(ofCrystals).toBeCloseTo(exact.expected.crystal_proportions[phase], 3);
    expect(solved.sumOfSquares).toBeLessThan(1e-5);
    expect(solved.chiSquare).toBeNaN();
  });

  it('finds An and Fo as unknowns, and what was taken in', () => {
    const daughter = { SiO2: 60, TiO2: 0.9, Al2O3: 16.5, FeOT: 7, MnO: 0.15, MgO: 3, CaO: 6.2, Na2O: 4, K2O: 2, P2O5: 0.25 };
    const assimilant = { SiO2: 72, TiO2: 0.3, Al2O3: 14, FeOT: 2.5, MnO: 0.05, MgO: 0.7, CaO: 2, Na2O: 3.6, K2O: 4.7, P2O5: 0.15 };
    const { parent } = plantedParent(
      daughter,
      { olivine: ['Fo83', 0.08], clinopyroxene: ['Wo42En46Fs12', 0.15], plagioclase: ['An72', 0.25], magnetite: ['Usp30', 0.03] },
      { composition: assimilant, mass: 0.12 },
    );
    const found = massBalance({
      parent,
      daughter,
      assimilant,
      draws: 0,
      errors: { relative: 1e-4, floor: 1e-4 },
      minerals: {
        olivine: { between: ['Fo60', 'Fo90'] },
        clinopyroxene: 'Wo42En46Fs12',
        plagioclase: { between: ['An40', 'An95'] },
        magnetite: 'Usp30',
      },
    });
    const of = (phase: string) => found.phases.find((each) => each.phase === phase)!;
    expect(of('olivine').value).toBeCloseTo(0.08, 3);
    expect(of('olivine').label).toMatch(/^Fo8[23]\.\d$/);
    expect(of('plagioclase').value).toBeCloseTo(0.25, 3);
    expect(of('plagioclase').label).toMatch(/^An7[12]\.\d$/);
    expect(of('assimilant').value).toBeCloseTo(-0.12, 3);
    expect(found.F.value).toBeCloseTo(0.61, 3);
  });

  it('conserves mass: F + phases = 1', () => {
    const random = seededDraws(11);
    for (let i = 0; i < 40; i++) {
      const daughter = daughterOf(random);
      const { parent, minerals } = plantedParent(daughter, {
        olivine: ['Fo80', 0.05],
        clinopyroxene: ['Wo42En46Fs12', 0.12],
        plagioclase: ['An75', 0.2],
      });
      const { F, phases } = massBalance({ parent: noisy(parent, 0.02, random), daughter: noisy(daughter, 0.02, random), minerals, draws: 0 });
      expect(F.value + phases.reduce((sum, { value }) => sum + value, 0)).toBeCloseTo(1, 10);
      for (const { value } of phases) expect(value).toBeGreaterThanOrEqual(0);
    }
  });

  it.each(['as given', 'volatile-free'] as const)('recovers planted assemblages within the stated intervals, basis %s', (basis) => {
    const random = seededDraws(2026);
    let [inside, all, accepted] = [0, 0, 0];
    for (let i = 0; i < 300; i++) {
      const daughter = daughterOf(random);
      const planted = {
        olivine: ['Fo80', 0.03 + 0.07 * random.uniform()],
        clinopyroxene: ['Wo42En46Fs12', 0.06 + 0.14 * random.uniform()],
        plagioclase: ['An75', 0.12 + 0.2 * random.uniform()],
        magnetite: ['Usp30', 0.02 + 0.03 * random.uniform()],
      } as const;
      const { parent, minerals, masses } = plantedParent(daughter, planted);
      const { phases, F, probability } = massBalance({
        parent: noisy(parent, 0.02, random),
        daughter: noisy(daughter, 0.02, random),
        minerals,
        errors: { relative: 0.02, floor: 0 },
        basis,
        seed: i,
        draws: 150,
      });
      for (const { phase, low, high } of phases) {
        all++;
        if (masses[phase] >= low && masses[phase] <= high) inside++;
      }
      all++;
      if (masses.liquid >= F.low && masses.liquid <= F.high) inside++;
      if (probability > 0.05) accepted++;
    }
    expect(inside / all).toBeGreaterThan(0.9);
    expect(inside / all).toBeLessThan(0.98);
    // A true balance has a chi-square that only one in twenty exceeds.
    expect(accepted / 300).toBeGreaterThan(0.91);
    expect(accepted / 300).toBeLessThan(0.985);
  });

  it('gives the same bytes for the same seed, and others for another', () => {
    const daughter = daughterOf(seededDraws(3));
    const { parent, minerals } = plantedParent(daughter, { olivine: ['Fo80', 0.05], plagioclase: ['An75', 0.2] });
    const run = (seed: number) => JSON.stringify(massBalance({ parent, daughter, minerals, seed, draws: 50 }));
    expect(run(4)).toBe(run(4));
    expect(run(4)).not.toBe(run(5));
  });

  it('says no when nothing fits, and refuses bad arguments by name', () => {
    const daughter = daughterOf(seededDraws(3));
    const { parent, minerals } = plantedParent(daughter, { olivine: ['Fo80', 0.05], plagioclase: ['An75', 0.2] });
    const reversed = massBalance({ parent: daughter, daughter: parent, minerals });
    expect(reversed.probability).toBeLessThan(1e-3);
    const good = { parent, daughter, minerals };
    expect(() => massBalance({ ...good, minerals: { plagioclase: 'An120' } })).toThrow(/above 100/);
    expect(() => massBalance({ ...good, minerals: { olivine: 'Fz80' } })).toThrow(/no olivine "Fz80"/);
    expect(() => massBalance({ ...good, minerals: { olivine: undefined } })).toThrow(/composition of olivine is not given/);
    expect(() => massBalance({ ...good, errors: { relative: 2 } })).toThrow(/errors.relative/);
    expect(() => massBalance({ ...good, errors: { SiO2: 0.5 } })).toThrow(/positive 1σ \(wt %\) for TiO2/);
    expect(() => massBalance({ ...good, closure: 'tight' as never })).toThrow(/closure must be/);
    expect(() => massBalance({ ...good, parent: { SiO2: 50 } })).toThrow(/parent lacks an oxide/);
    expect(() => massBalance({ ...good, draws: 0.5 })).toThrow(/draws is 0.5/);
    expect(() => massBalance({ ...good, seed: 1.5 })).toThrow(/seed is 1.5/);
  });
});
