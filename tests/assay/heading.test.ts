import { describe, expect, it } from 'vitest';
import { readHeading } from '../../kernel-lib/assay/heading';

// Spellings of laboratories, papers and compilations (common practice): head, symbol, unit, method.
describe('column heads', () => {
  it.each([
    ['SiO2', 'SiO2', '', ''],
    ['SiO₂', 'SiO2', '', ''],
    ['SIO2_PCT', 'SiO2', 'wt%', ''],
    ['Silica', 'SiO2', '', ''],
    ['SiO2 (wt%)', 'SiO2', 'wt%', ''],
    ['SiO2_wt%', 'SiO2', 'wt%', ''],
    ['SiO2 [wt.-%]', 'SiO2', 'wt%', ''],
    ['SiO2, %', 'SiO2', 'wt%', ''],
    ['SiO2%', 'SiO2', 'wt%', ''],
    ['% SiO2', 'SiO2', 'wt%', ''],
    ['Ba_ppm', 'Ba', 'ppm', ''],
    ['Ba ppm', 'Ba', 'ppm', ''],
    ['Ba (µg/g)', 'Ba', 'ppm', ''],
    ['Ba (μg g⁻¹)', 'Ba', 'ppm', ''],
    ['ppm Ba', 'Ba', 'ppm', ''],
    ['Ba mg/kg', 'Ba', 'ppm', ''],
    ['Barium (ppm)', 'Ba', 'ppm', ''],
    ['Au ppb', 'Au', 'ppb', ''],
    ['Au (g/t)', 'Au', 'ppm', ''],
    ['Re (pg/g)', 'Re', 'ppt', ''],
    ['Nd143/Nd144', '143Nd/144Nd', '', ''],
    ['87Sr/86Sr', '87Sr/86Sr', '', ''],
    ['⁸⁷Sr/⁸⁶Sr', '87Sr/86Sr', '', ''],
    ['Sr87/86', '87Sr/86Sr', '', ''],
    ['143Nd144Nd', '143Nd/144Nd', '', ''],
    ['eNd', 'epsilon-Nd', '', ''],
    ['εNd', 'epsilon-Nd', '', ''],
    ['epsilon Hf', 'epsilon-Hf', '', ''],
    ['Fe2O3(T)', 'Fe2O3T', '', ''],
    ['FeOt', 'FeOT', '', ''],
    ['TFe2O3', 'Fe2O3T', '', ''],
    ['Fe2O3*', 'Fe2O3T', '', ''],
    ['FeO* (wt%)', 'FeOT', 'wt%', ''],
    ['FeO total (wt%)', 'FeOT', 'wt%', ''],
    ['Fe2O3 (tot) %', 'Fe2O3T', 'wt%', ''],
    ['ΣFeO', 'FeOT', '', ''],
    ['Fe (total)', 'Fe', '', ''],
    ['Fe2O3', 'Fe2O3', '', ''],
    ['FeO', 'FeO', '', ''],
    ['LOI', 'LOI', '', ''],
    ['L.O.I.', 'LOI', '', ''],
    ['LOI (%)', 'LOI', 'wt%', ''],
    ['H2O+', 'H2O+', '', ''],
    ['H₂O⁻', 'H2O-', '', ''],
    ['H2O(+) wt%', 'H2O+', 'wt%', ''],
    ['Total', 'Total', '', ''],
    ['Sum', 'Total', '', ''],
    ['Zr XRF', 'Zr', '', 'XRF'],
    ['ICP-MS_Ba', 'Ba', '', 'ICP-MS'],
    ['Ba (ICP-MS, ppm)', 'Ba', 'ppm', 'ICP-MS'],
    ['GR-20_Zr_ppm', 'Zr', 'ppm', 'GR-20'],
    ['Ba137', 'Ba', '', ''],
    ['Zr90 (ppm)', 'Zr', 'ppm', ''],
    ['S (%)', 'S', 'wt%', ''],
    ['as (ppm)', 'As', 'ppm', ''],
  ])('%s is %s in "%s" by "%s"', (head, symbol, unit, method) => {
    expect(readHeading(head)).toMatchObject({ role: 'analyte', symbol, method });
    expect((readHeading(head) as { unit?: { unit: string } }).unit?.unit ?? '').toBe(unit);
  });

  it.each([
    'Ba/La',
    'Rb/Sr',
    'Eu/Eu*',
    '(La/Yb)N',
    'La_N',
    'Mg#',
    'Na2O+K2O',
    'SiO2 norm',
    'SiO2 anhydrous (wt%)',
    '(87Sr/86Sr)i',
    'eNd(t)',
    'Sample type',
    'Rock name',
    'as',
    'no data',
    'pr',
    'P1',
    'KE-12',
    'RB-03',
    'B-15-404',
    'V3',
    '__proto__',
    'constructor',
    'Location In',
  ])('%s is not an analyte', (head) => {
    expect(readHeading(head).role).not.toBe('analyte');
  });

  it.each([
    ['Sample', 'sample'],
    ['Sample ID', 'sample'],
    ['SAMPLE_NO.', 'sample'],
    ['Sample #', 'sample'],
    ['Volcano', 'volcano'],
    ['Volcano name', 'volcano'],
  ])('%s is the label %s', (head, label) => {
    expect(readHeading(head)).toMatchObject({ role: 'label', label });
  });

  it.each([
    ['Latitude', 'latitude', false],
    ['Lat (S)', 'latitude', true],
    ['LON', 'longitude', false],
    ['Long. W', 'longitude', true],
    ['Longitude (°)', 'longitude', false],
    ['Latitude (deg)', 'latitude', false],
  ])('%s is %s, sign turned: %s', (head, symbol, negated) => {
    expect(readHeading(head)).toMatchObject({ role: 'quantity', symbol, negated });
  });

  it.each([
    ['2σ', '', 2],
    ['±', '', 1],
    ['Ba 2SD', 'Ba', 2],
    ['87Sr/86Sr ±2σ', '87Sr/86Sr', 2],
    ['SiO2 error', 'SiO2', 1],
    ['2SE 143Nd/144Nd', '143Nd/144Nd', 2],
    ['Ba 1s (ppm)', 'Ba', 1],
  ])('%s is the uncertainty of "%s", %dσ', (head, of, sigmas) => {
    expect(readHeading(head)).toMatchObject({ role: 'uncertainty', of, sigmas });
  });

  it('takes short symbols in any case where a whole head row is in capitals', () => {
    expect(readHeading('CO', true)).toMatchObject({ role: 'analyte', symbol: 'Co' });
    expect(readHeading('CO')).toEqual({ role: 'unknown' });
  });
});
