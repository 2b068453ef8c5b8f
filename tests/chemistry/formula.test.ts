import { describe, expect, it } from 'vitest';
import { findAnalyte, formulaMass, knownAnalytes, massUnitFactor, parseFormula } from 'wedgework';

describe('parseFormula', () => {
  it('counts the atoms of a formula', () => {
    expect([...parseFormula('Al2O3')]).toEqual([['Al', 2], ['O', 3]]);
    expect([...parseFormula('CaCO3')]).toEqual([['Ca', 1], ['C', 1], ['O', 3]]);
  });

  it.each(['', 'sio2', 'Si O2', '2SiO', 'SiO2 ', '__proto__'])('refuses "%s", naming it', (text) => {
    expect(() => parseFormula(text)).toThrow(`"${text}" is not a chemical formula`);
  });
});

describe('formulaMass', () => {
  it('adds what the caller says the atoms weigh', () => {
    expect(formulaMass('H2O', (element) => (element === 'H' ? 1 : 16))).toBe(18);
  });
});

describe('massUnitFactor', () => {
  it('follows the definitions of the units', () => {
    // Definition: 1 wt % = 10 g/kg = 10 000 µg/g.
    expect(massUnitFactor('wt%', 'ppm')).toBe(10_000);
    expect(massUnitFactor('ppb', 'ppm')).toBe(1e-3);
    expect(massUnitFactor('ppt', 'wt%')).toBeCloseTo(1e-10, 22);
  });
});

describe('findAnalyte', () => {
  it('gives oxides in wt %, elements in ppm, isotope ratios as bare numbers', () => {
    expect(findAnalyte('SiO2')).toEqual({ symbol: 'SiO2', kind: 'oxide', unit: 'wt%' });
    expect(findAnalyte('Ba')).toEqual({ symbol: 'Ba', kind: 'element', unit: 'ppm' });
    expect(findAnalyte('87Sr/86Sr')).toEqual({ symbol: '87Sr/86Sr', kind: 'isotope-ratio', unit: '' });
  });

  it('does not take an inherited property for an analyte', () => {
    expect(findAnalyte('constructor')).toBeUndefined();
    expect(findAnalyte('__proto__')).toBeUndefined();
  });

  it('lists each symbol once', () => {
    const symbols = knownAnalytes.map(({ symbol }) => symbol);
    expect(new Set(symbols).size).toBe(symbols.length);
  });
});
