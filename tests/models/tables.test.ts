import { describe, expect, it } from 'vitest';
import {
  coefficientRange,
  coefficientsFor,
  findSource,
  mantleMode,
  mantleModes,
  mineralComposition,
  mineralCompositions,
  partitionCoefficients,
} from 'wedgework';

describe('tables of mineral–melt partitioning', () => {
  it('cites a work of the bibliography in every row', () => {
    for (const { source } of [...partitionCoefficients(), ...mineralCompositions(), ...mantleModes()]) expect(findSource(source).id).toBe(source);
  });

  it('prefers a single value to a range, and the better standing', () => {
    const nickel = coefficientsFor('olivine', 'basalt', 'Ni');
    expect(nickel[0]).toMatchObject({ value: 14, source: 'winter_2001' }); // Winter 2001, table 9-1
    expect(nickel.at(-1)).toMatchObject({ minimum: 5.9, maximum: 29 }); // Rollinson 1993, table 4.1
    expect(coefficientRange('olivine', 'basalt', 'Ni')).toMatchObject({ low: 5.9, high: 29 });
  });

  it('keeps mineral sums near 100 %', () => {
    for (const { mineral, label, oxides } of mineralCompositions()) {
      let sum = 0;
      for (const value of oxides.values()) sum += value;
      // Halogens stand beside an oxygen that is not there; natural analyses sum as printed.
      expect(sum, `${mineral} ${label}`).toBeGreaterThan(98.5);
      expect(sum, `${mineral} ${label}`).toBeLessThan(101.7);
    }
  });

  it('names what there is when something is asked for that is not there', () => {
    expect(() => mineralComposition('olivine', 'Fo83')).toThrow(/"Fo80"/);
    expect(() => mantleMode('mode', 'nobody_1900')).toThrow(/mckenzie_onions_1991/);
    expect(mantleMode('mode', 'mckenzie_onions_1991', 'spinel').minerals.get('olivine')).toBe(0.578);
  });
});
