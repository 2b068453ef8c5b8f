import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

/** Printed to 6 digits: values of the published closed forms, computed independently at high precision. */
const relative = (got: number, printed: number) => expect(Math.abs(got / printed - 1)).toBeLessThan(1e-5);

describe('closed forms of melting, crystallisation and mixing', () => {
  it('agree with tabled values of Rayleigh and equilibrium crystallisation (Neumann 1954; Gast 1968; Shaw 1970)', () => {
    // F, D, liquid, instantaneous solid, accumulated solid, equilibrium liquid
    const rows = [
      [0.9, 0.1, 1.09947, 0.109947, 0.104807, 1.0989],
      [0.5, 0.1, 1.86607, 0.186607, 0.133934, 1.81818],
      [0.5, 2, 0.5, 1, 1.5, 0.666667],
      [0.3, 0.5, 1.82574, 0.912871, 0.646111, 1.53846],
      [0.1, 0.01, 9.77237, 0.0977237, 0.025292, 9.17431],
    ];
    for (const [F, D, liquid, solid, cumulate, equilibrium] of rows) {
      relative(ww.rayleighLiquid(D, F), liquid);
      relative(ww.rayleighSolid(D, F), solid);
      relative(ww.rayleighCumulate(D, F), cumulate);
      relative(ww.equilibriumLiquid(D, F), equilibrium);
    }
  });

  it('agree with tabled values of batch and fractional melting (Shaw 1970)', () => {
    // F, D0, P, batch, increment, pooled (NaN: not tabled)
    const rows = [
      [0.1, 0.05, 0.05, 6.89655, 2.7017, 8.78423],
      [0.1, 0.05, 0.3, 8.33333, 2.35778, 9.52844],
      [0.05, 0.01, 0.2, 20, NaN, NaN],
      [0.15, 0.3, 0.6, 2.77778, 2.62791, 2.98759],
    ];
    for (const [F, D0, P, batch, increment, pooled] of rows) {
      relative(ww.batchMelt(D0, P, F), batch);
      if (Number.isNaN(increment)) continue;
      relative(ww.fractionalMelt(D0, P, F), increment);
      relative(ww.pooledFractionalMelt(D0, P, F), pooled);
    }
  });

  it('agree with a printed teaching case: 50 % batch melt at D = 10 holds 18 % of C0 (J. Brady, Smith College petrology notes 9.4)', () => {
    expect(Math.round(100 * ww.batchMelt(10, 10, 0.5))).toBe(18);
  });

  it('lose nothing: liquid and solid together hold the whole', () => {
    const coefficient = fc.double({ min: 1e-4, max: 20, noNaN: true });
    const fraction = fc.double({ min: 0.01, max: 0.99, noNaN: true });
    fc.assert(
      fc.property(coefficient, fraction, (D, F) => {
        expect(F * ww.rayleighLiquid(D, F) + (1 - F) * ww.rayleighCumulate(D, F)).toBeCloseTo(1, 9);
        expect(F * ww.equilibriumLiquid(D, F) + (1 - F) * ww.equilibriumSolid(D, F)).toBeCloseTo(1, 9);
        expect(F * ww.batchMelt(D, D, F) + (1 - F) * ww.batchResidue(D, D, F)).toBeCloseTo(1, 9);
        expect(F * ww.pooledFractionalMelt(D, D, F) + (1 - F) * ww.fractionalResidue(D, D, F)).toBeCloseTo(1, 9);
      }),
    );
    expect(ww.pooledFractionalMelt(0.05, 1e-13, 0.1)).toBeCloseTo(ww.pooledFractionalMelt(0.05, 1e-9, 0.1), 6);
    expect(ww.fractionalResidue(0.01, 0.2, 0.06)).toBe(0); // P·F > D0: the element is exhausted
  });

  it('mix ratios by the denominator, as in a printed practical: river and sea Sr (Imperial College London)', () => {
    const concentration = ww.mixedConcentration(1 / 3, 0.93, 95);
    expect(Math.round(concentration)).toBe(64);
    const mixed = ww.mixedRatio(1 / 3, { ratio: 0.721, concentration: 0.93 }, { ratio: 0.7091, concentration: 95 });
    expect(mixed.toFixed(4)).toBe('0.7092');
    expect(mixed).toBeCloseTo(0.7091579636516, 12); // computed independently
  });
});
