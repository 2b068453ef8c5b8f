import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { atomicWeight, massFactor, massUnitFactor, molarMass, type MassUnit } from 'wedgework';

interface Check {
  readonly kind: string;
  readonly from_: string;
  readonly to: string;
  readonly published: string;
  readonly suggested_tolerance: string;
  readonly source_key: string;
}

const file = readFileSync(join(__dirname, '../data/chemistry/oxide-checks.csv'), 'utf8');
const checks = Papa.parse<Check>(file, { header: true, skipEmptyLines: true }).data;

describe('massFactor against handbook conversion tables', () => {
  // Each published factor has its source key in the file; the tolerance covers the older atomic weights that handbooks used.
  const factors = checks.filter(({ kind, from_ }) => kind === 'factor' && from_ !== 'wt%');
  it('has the whole table to check against', () => expect(factors.length).toBeGreaterThan(40));

  it.each(factors)('$from_ → $to = $published ($source_key)', ({ from_: from, to, published, suggested_tolerance: tolerance }) => {
    expect(Math.abs(massFactor(from, to) - Number(published))).toBeLessThanOrEqual(Number(tolerance));
  });

  it.each(checks.filter(({ kind }) => kind === 'worked_example' || kind === 'paired_certificate_values'))(
    '$from_ is $published $to ($source_key)',
    ({ from_: from, to, published, suggested_tolerance: tolerance }) => {
      const [amount, unit, substance] = from.split(' ');
      const [first, second] = to.split(' ');
      const [toUnit, target] = [first as MassUnit, second];
      const result = Number(amount) * massFactor(substance, target) * massUnitFactor(unit as MassUnit, toUnit);
      expect(Math.abs(result - Number(published))).toBeLessThanOrEqual(Number(tolerance));
    },
  );

  it.each([
    ['W-2', 1.53, 8.34, 10.83, 0.1], // USGS certificate of analysis, Diabase W-2 (1995)
    ['BM', 1.6, 7.28, 9.68, 0.05], // TGL 23955/03
  ])('%s: Fe2O3 and FeO add up to the certified total iron', (_, ferric, ferrous, total, tolerance) => {
    expect(Math.abs(ferric + ferrous * massFactor('FeO', 'Fe2O3T') - total)).toBeLessThanOrEqual(tolerance);
  });
});

describe('molarMass', () => {
  it('adds the IUPAC 2021 abridged weights', () => {
    // Prohaska et al. 2022, tables 1 and 2: Si 28.085, O 15.999.
    expect(molarMass('SiO2')).toBeCloseTo(28.085 + 2 * 15.999, 10);
    expect(molarMass('FeOT')).toBe(molarMass('FeO'));
    expect(atomicWeight('Fe')).toBe(55.845);
  });

  it('refuses what has no atomic weight or shares no cation', () => {
    expect(() => molarMass('Xx')).toThrow('No atomic weight for "Xx"');
    expect(() => massFactor('SiO2', 'TiO2')).toThrow('do not share a cation');
  });
});
