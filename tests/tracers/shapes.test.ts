import { describe, expect, it } from 'vitest';
import * as ww from 'wedgework';

const chondrite = ww.rareEarths.map((element) => ww.reservoir('chondrite-c1-1989').values.get(element)!.value);
const basis = ww.rareEarthPolynomials();
/** A suite of one pattern made from given λs, with some elements multiplied. */
const patternOf = (lambdas: readonly number[], times: Readonly<Record<string, number>> = {}, without: readonly string[] = []) =>
  ww.suiteOf({
    columns: ww.rareEarths.flatMap((symbol, e) =>
      without.includes(symbol)
        ? []
        : [
            ww.column({
              symbol,
              values: [chondrite[e] * Math.exp(lambdas.reduce((sum, lambda, k) => sum + lambda * basis[k][e], 0)) * (times[symbol] ?? 1)],
            }),
          ],
    ),
  });

describe('orthogonal polynomials of the rare earths', () => {
  it('have the constants printed by O’Neill 2016 (from memory)', () => {
    // f1 = r − 1.05477; f2 = (r − 1.00533)(r − 1.12824); f3 = (r − 1.060548)(r − 1.145519)(r − 0.991412)
    ww.rareEarths.forEach((element, e) => {
      const r = ww.ionicRadius(element);
      expect(basis[1][e]).toBeCloseTo(r - 1.05477, 5);
      expect(basis[2][e]).toBeCloseTo((r - 1.00533) * (r - 1.12824), 5);
      expect(basis[3][e]).toBeCloseTo((r - 1.060548) * (r - 1.145519) * (r - 0.991412), 6);
    });
  });

  it('are orthogonal over the rare earths without Eu', () => {
    for (let a = 0; a < 4; a++) {
      for (let b = 0; b < a; b++) {
        const product = ww.rareEarths.reduce((sum, element, e) => sum + (element === 'Eu' ? 0 : basis[a][e] * basis[b][e]), 0);
        expect(Math.abs(product)).toBeLessThan(1e-12);
      }
    }
  });
});

describe('shapes', () => {
  it('give back the λs that made a pattern, with all elements or some', () => {
    const made = [2.5, 12, -60, 300];
    for (const without of [[], ['Pr', 'Tb', 'Ho', 'Tm']]) {
      const { columns, outlying } = ww.rareEarthShapes(patternOf(made, {}, without));
      made.forEach((lambda, k) => expect(columns.get(`lambda-${k}`)!.values[0]).toBeCloseTo(lambda, 7));
      expect(columns.get('misfit')!.values[0]).toBeLessThan(1e-10);
      expect(outlying[0]).toEqual([]);
    }
  });

  it('are flat for chondrite, and name an element off the curve', () => {
    const flat = ww.rareEarthShapes(patternOf([0, 0, 0, 0]));
    expect(flat.columns.get('lambda-1')!.values[0]).toBeCloseTo(0, 9);
    const { outlying, residuals } = ww.rareEarthShapes(patternOf([3, 8, 0, 0], { Ce: 0.6, Eu: 0.7 }));
    expect(outlying[0]).toContain('Ce');
    expect(outlying[0]).not.toContain('Eu');
    // Eu took no part: its residual is its anomaly, moved only by what the spoiled Ce did to the curve
    const clean = ww.rareEarthShapes(patternOf([3, 8, 0, 0], { Eu: 0.7 }));
    expect(Math.exp(clean.residuals.get('Eu')![0])).toBeCloseTo(0.7, 9);
    expect(Math.exp(residuals.get('Eu')![0])).toBeLessThan(0.8);
  });

  it('state the 1σ of orthogonal least squares', () => {
    const one = ww.rareEarthShapes(patternOf([2, 5, 0, 0]), { error: 0.05 });
    // orthogonal terms with equal errors: variance of λk is σ² / Σ fk²
    for (let k = 0; k < 4; k++) {
      const norm = ww.rareEarths.reduce((sum, element, e) => sum + (element === 'Eu' ? 0 : basis[k][e] ** 2), 0);
      expect(one.columns.get(`lambda-${k}`)!.sigma![0]).toBeCloseTo(0.05 / Math.sqrt(norm), 8);
    }
  });

  it('leave samples with too few elements unfitted, and refuse bad options', () => {
    const few = ww.rareEarthShapes(patternOf([1, 0, 0, 0], {}, ['Ce', 'Pr', 'Sm', 'Gd', 'Tb', 'Dy', 'Ho', 'Er', 'Tm', 'Lu']));
    expect(few.columns.get('lambda-0')!.values[0]).toBeNaN();
    expect(few.notes.join(' ')).toMatch(/1 samples not fitted/);
    expect(ww.rareEarthShapes(patternOf([1, 2, 0, 0]), { degree: 1 }).columns.has('lambda-2')).toBe(false);
    const suite = patternOf([1, 0, 0, 0]);
    expect(() => ww.rareEarthShapes(suite, { degree: 4 as never })).toThrow(/degree/);
    expect(() => ww.rareEarthShapes(suite, { exclude: ['Ba'] })).toThrow(/not a rare earth/);
    expect(() => ww.rareEarthShapes(suite, { error: 0 })).toThrow(/error is 0/);
    expect(() => ww.rareEarthShapes(suite, { outlyingBeyond: 0 })).toThrow(/outlyingBeyond/);
    expect(() => ww.rareEarthShapes(suite, { reference: { La: 1 } })).toThrow(/has no Ce/);
  });
});
