import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { bufferFugacity, column, splitIron, suiteOf, type IronSplitOptions, type OxygenBuffer, type Suite } from 'wedgework';

const read = (file: string) => JSON.parse(readFileSync(join(__dirname, '../data', file), 'utf8'));
const [melt, ratios] = ['redox-kress-carmichael-1991', 'redox-lemaitre-middlemost'].map((key) =>
  read('recast/iron.json').find((each: { key: string }) => each.key === key),
);
const averages: Record<string, Record<string, number>> = Object.fromEntries(
  read('classify/averages.json')
    .filter(({ key }: { key: string }) => key.startsWith('avg-lemaitre1976'))
    .map(({ key, inputs }: any) => [key.slice('avg-lemaitre1976-'.length), inputs.majors_wt_percent]),
);
// Averages of Le Maitre (1976) that the iron cases use besides those of the classification file; from memory.
const suiteFrom = (majors: Record<string, number>): Suite =>
  suiteOf({ columns: Object.entries(majors).map(([symbol, value]) => column({ symbol, values: [value] })) });
const split = (majors: Record<string, number>, options: IronSplitOptions) => {
  const made = splitIron(suiteFrom(majors), options);
  return { FeO: made.values('FeO')[0], Fe2O3: made.values('Fe2O3')[0] };
};

describe('splitIron', () => {
  const known = ratios.expected.filter(({ rock }: { rock: string }) => averages[rock] !== undefined);
  it('has cases', () => expect(known.length).toBeGreaterThanOrEqual(4));

  for (const each of known) {
    it(`${each.rock}: Le Maitre 1976 and fixed ratios, computed at 40 digits from the published formulas`, () => {
      const majors = averages[each.rock];
      const byFormula = split(majors, { method: 'le-maitre-1976' });
      expect(byFormula.FeO / (byFormula.FeO + byFormula.Fe2O3)).toBeCloseTo(each.LeMaitre1976_volcanic_oxidation_ratio, 10);
      // Those answers use 0.899809 g FeO to a gram of Fe2O3; ours follows from the atomic weights of 2021.
      expect(byFormula.FeO).toBeCloseTo(each.FeO, 4);
      expect(byFormula.Fe2O3).toBeCloseTo(each.Fe2O3, 4);
      for (const ratio of [0.2, 0.35]) {
        const fixed = split(majors, { method: 'fixed', ratio });
        expect(fixed.FeO).toBeCloseTo(each[`wt_ratio_${ratio.toFixed(2)}`].FeO, 4);
        expect(fixed.Fe2O3).toBeCloseTo(each[`wt_ratio_${ratio.toFixed(2)}`].Fe2O3, 4);
      }
    });
  }

  const reached = melt.expected.filter(({ rock }: { rock: string }) => averages[rock] !== undefined);
  it.each(reached as any[])('$rock at $T_C °C, $P_bar bar, $buffer (Kress & Carmichael 1991, computed at 40 digits)', (each: any) => {
    const [name, offset] = each.buffer === 'NNO+1' ? ['NNO', 1] : [each.buffer === 'QFM' ? 'FMQ' : each.buffer, 0];
    expect(bufferFugacity(name as OxygenBuffer, each.T_C, each.P_bar, offset as number)).toBeCloseTo(each.log10fO2, 8);
    const made = split(averages[each.rock], {
      method: 'kress-carmichael-1991',
      temperature: each.T_C,
      pressure: each.P_bar,
      oxygen: { buffer: name as OxygenBuffer, offset: offset as number },
    });
    const ferric = (2 * made.Fe2O3) / 159.687;
    // Molar masses differ in the fifth digit, which the equation hands on to the share.
    expect(ferric / (ferric + made.FeO / 71.844)).toBeCloseTo(each.Fe3_over_FeT, 5);
  });

  it('keeps what was measured and splits the rest by the stated fallback', () => {
    const suite = suiteOf({
      columns: [
        column({ symbol: 'SiO2', values: [50, 60, 55] }),
        column({ symbol: 'Na2O', values: [3, 4, 3] }),
        column({ symbol: 'K2O', values: [1, 2, 1] }),
        column({ symbol: 'FeO', values: [8, NaN, NaN] }),
        column({ symbol: 'Fe2O3', values: [2, NaN, NaN] }),
        column({ symbol: 'FeOT', values: [NaN, 6, NaN] }),
      ],
    });
    const made = splitIron(suite);
    expect(made.values('FeO')[0]).toBe(8);
    expect(made.values('Fe2O3')[0]).toBe(2);
    // Le Maitre 1976: 0.93 − 0.0042·60 − 0.022·6 = 0.546
    expect(made.values('FeO')[1] / (made.values('FeO')[1] + made.values('Fe2O3')[1])).toBeCloseTo(0.546, 12);
    expect(made.values('FeO')[2]).toBeNaN();
    expect(made.has('FeOT')).toBe(false);
    expect(made.lineage.at(-1)!.detail.rows).toEqual({ measured: 1, split: 1, none: 1 });
    expect(splitIron(suite, { otherwise: 'none' }).values('FeO')[1]).toBeNaN();
  });

  it('Middlemost 1989 by TAS field', () => {
    const majors = { SiO2: 60, Na2O: 4, K2O: 2, FeOT: 6 };
    const made = split(majors, { method: 'middlemost-1989', fields: ['O2'] });
    expect(made.Fe2O3 / made.FeO).toBeCloseTo(0.35, 12);
    expect(split(majors, { method: 'middlemost-1989', fields: ['Ph'] }).FeO).toBeNaN();
  });

  it('says what a method lacks', () => {
    const suite = suiteFrom({ SiO2: 60, FeOT: 6 });
    expect(() => splitIron(suite, { method: 'best' as never })).toThrow(/method must be one of measured, fixed/);
    expect(() => splitIron(suite, { method: 'fixed' })).toThrow(/needs ratio/);
    expect(() => splitIron(suite, { method: 'middlemost-1989' })).toThrow(/needs fields/);
    expect(() => splitIron(suite, { method: 'kress-carmichael-1991' })).toThrow(/needs temperature/);
    expect(() => splitIron(suite, { method: 'kress-carmichael-1991', temperature: 1200, oxygen: { buffer: 'QFM' as never } })).toThrow(
      /needs oxygen/,
    );
    expect(() => bufferFugacity('NNO', NaN)).toThrow(/must be numbers/);
  });
});
