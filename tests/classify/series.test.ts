import { describe, expect, it } from 'vitest';
import { arcMagmaKinds, classify, consensus, explain, immobileAffinity, nameRocks, splitIron, suiteTrend, withVerdicts, type MimeBundle } from 'wedgework';
import { rock, suiteFrom, type Cells } from './suites';

/** A suite on a straight trend of given rise of SiO2 for one unit of FeOT/MgO, with a little scatter. */
function trend(rise: number, count = 20): Cells[] {
  return Array.from({ length: count }, (_, i) => {
    const ratio = 1 + (2.5 * i) / (count - 1);
    const SiO2 = 50 + rise * (ratio - 1) + 0.3 * Math.sin(7 * i);
    const MgO = 5 - 0.9 * (ratio - 1);
    return rock({ SiO2, MgO, FeOT: ratio * MgO, CaO: 9 - 0.25 * (SiO2 - 50), Na2O: 2.6 + 0.06 * (SiO2 - 50), K2O: 0.6 + 0.05 * (SiO2 - 50) });
  });
}

describe('suiteTrend', () => {
  it('reads the series from the slope against 6.4 % SiO2 for one unit of FeO*/MgO (Miyashiro 1974)', () => {
    const suite = suiteFrom([...trend(3), ...trend(9), ...trend(6.4), ...trend(9, 4)], {
      labels: { volcano: [...Array(20).fill('low'), ...Array(20).fill('high'), ...Array(20).fill('even'), ...Array(4).fill('few')] },
    });
    const { groups, lineage } = suiteTrend(suite, { group: 'volcano' });
    expect(groups.map(({ group, series }) => [group, series])).toEqual([
      ['low', 'tholeiitic'],
      ['high', 'calc-alkalic'],
      ['even', 'not decided'],
      ['few', 'not decided'],
    ]);
    expect(groups[0].slope.value).toBeCloseTo(3, 0);
    expect(groups[1].slope.value).toBeCloseTo(9, 0);
    expect(groups[0].steeper).toBe(0);
    expect(groups[1].steeper).toBe(1);
    expect(groups[3].because).toMatch(/fewer than 5/);
    expect(lineage.at(-1)!.detail).toMatchObject({ seed: 1, draws: 1000 });
  });

  it("finds Peacock's index where CaO meets Na2O + K2O, and its class (51, 56, 61: Peacock 1931)", () => {
    // CaO = 9 − 0.25 (S − 50) meets alkalis 3.2 + 0.11 (S − 50) at S = 50 + 5.8/0.36 = 66.1
    const { groups } = suiteTrend(suiteFrom(trend(6)));
    expect(groups[0].alkaliLime.value).toBeCloseTo(66.1, 0);
    expect(groups[0].alkaliLimeClass).toBe('calcic');
  });

  it('leaves out magnesian rocks and says so; refuses what it does not know', () => {
    const suite = suiteFrom([...trend(9), rock({ MgO: 12 })]);
    expect(suiteTrend(suite).groups[0].count).toBe(20);
    expect(() => suiteTrend(suite, { group: 'island' })).toThrow(/no label "island"/);
    expect(() => suiteTrend(suite, { mostMagnesia: -1 })).toThrow(/mostMagnesia/);
  });
});

describe('immobileAffinity', () => {
  it('needs two ratios of three, and calls disagreement transitional (Ross & Bédard 2009)', () => {
    const { affinity, because } = immobileAffinity(
      suiteFrom([
        { Zr: 20, Y: 10, La: 2, Yb: 1, Th: 0.3 },
        { Zr: 50, Y: 10, La: 6, Yb: 1, Th: 0.9 },
        { Zr: 20, Y: 10, La: 6, Yb: 1, Th: 0.9 },
        { Zr: 20, Y: 10, La: 2, Yb: 1 },
        { Zr: 20, Y: 10 },
      ]),
    );
    expect(affinity).toEqual(['tholeiitic', 'calc-alkaline', 'transitional', 'tholeiitic', '']);
    expect(because[4]).toMatch(/fewer than two ratios: Zr\/Y tholeiitic, La\/Yb needs La, Yb/);
  });
});

describe('arcMagmaKinds', () => {
  const adakite = { ...rock({ SiO2: 64, FeOT: 4, MgO: 2, CaO: 5, Na2O: 4.5, K2O: 1.5 }), Sr: 800, Y: 9, Yb: 0.9, La: 20, Ni: 30, Cr: 40 };
  it('keeps published lists apart and says where they disagree', () => {
    const { kinds, disagreements, schemes } = arcMagmaKinds(suiteFrom([adakite, { ...adakite, Yb: 1.85 }, { ...adakite, Sr: 350 }, rock({})]));
    expect(kinds[0]).toContain('adakite-like (Defant & Drummond 1990, Richards & Kerrich 2007, Martin 1999)');
    // Yb 1.9 against 1.8 ppm, Sr 400 against 300 ppm, and La/Yb ≥ 20 of Richards & Kerrich.
    expect(kinds[1]).toContain('adakite-like (Defant & Drummond 1990)');
    expect(disagreements[1]).toContain('Martin 1999 fails Yb ≤ 1.8');
    expect(kinds[2]).toContain('adakite-like (Martin 1999)');
    expect(disagreements[2]).toContain('Defant & Drummond 1990 fails Sr ≥ 400');
    expect(kinds[3]).toBe('high-Mg-number andesite');
    expect(schemes.get('adakite-1990')!.remarks[3]).toMatch(/fails SiO2 ≥ 56/);
  });

  it('high-Mg andesites, boninites, the shoshonite association', () => {
    const { kinds } = arcMagmaKinds(
      suiteFrom([
        rock({ SiO2: 58, MgO: 7, FeOT: 6, CaO: 7 }),
        rock({ SiO2: 54, MgO: 10, TiO2: 0.3 }),
        rock({ SiO2: 54, Na2O: 3.2, K2O: 3.2, TiO2: 0.8, CaO: 8, MgO: 5, FeOT: 8 }),
      ]),
    );
    expect(kinds[0]).toBe('high-Mg andesite; high-Mg-number andesite; primitive andesite');
    expect(kinds[1]).toContain('boninite');
    expect(kinds[2]).toContain('shoshonite association');
  });

  it('height above the axis through N-MORB and OIB', () => {
    const { aboveMantleAxis } = arcMagmaKinds(suiteFrom([{ Nb: 0.7639344, Yb: 1, Th: 0.3934426 }]));
    // Ten times the Th/Yb of N-MORB (Sun & McDonough 1989) at its Nb/Yb.
    expect(aboveMantleAxis[0]).toBeCloseTo(1, 6);
  });
});

describe('consensus', () => {
  const calcAlkaline = { ...rock({ SiO2: 60, MgO: 4, FeOT: 5.5, K2O: 1.5, CaO: 6.5 }), Zr: 120, Y: 20, La: 15, Yb: 2, Th: 3, Nb: 5 };
  const tholeiite = { ...rock({ SiO2: 54, MgO: 4, FeOT: 11, K2O: 0.4, Na2O: 2.5 }), Zr: 50, Y: 25, La: 3, Yb: 2.5, Th: 0.3, Nb: 1 };

  it('reads agreement, names what disagrees and what could not be asked', () => {
    const made = consensus(suiteFrom([calcAlkaline, tholeiite, { ...calcAlkaline, Zr: 30, Y: 20, La: 4, Th: 0.4 }, { SiO2: 60, K2O: 1 }]));
    expect(made.reading[0]).toBe('medium-K, calc-alkaline');
    expect(made.agree[0]).toBe('FeO*/MgO, AFM, immobile elements');
    expect(made.names.names[0]).toBe('medium-K andesite');
    expect(made.reading[1]).toBe('low-K, tholeiitic');
    expect(made.against[2]).toBe('immobile elements');
    expect(made.reading[2]).toBe('medium-K, calc-alkaline');
    expect(made.because[2]).toBe('Calc-alkaline by FeO*/MgO, AFM, against immobile elements.');
    expect(made.reading[3]).toBe('');
    expect(made.notAsked[3]).toMatch(/AFM: needs MgO, FeOT, Na2O/);
    expect(String((made.toMimeBundle() as MimeBundle)['text/plain'])).toContain('not audited');
  });

  it('counts mobile schemes less where K or Na is flagged as moved, and says why', () => {
    const altered = { ...tholeiite, K2O: 3 };
    const made = consensus(suiteFrom([altered, altered], { labels: { alteration: ['', 'K gain'] } }));
    expect(made.reading[0]).toMatch(/^high-K/);
    expect(made.reading[1]).not.toMatch(/-K/);
    expect(made.because[1]).toMatch(/flagged as altered \(K gain\); counted less: .*K2O moved/);
    expect(made.verdicts.schemes.get('alkalinity-nb-y')!.symbols[1]).toBe('S');
  });

  it('reads the reasons of a flag: elements that are named, or every mobile one', () => {
    const flags = ['Na2O 0.6 below 1', 'LOI 4 above 2.5', 'Na2O 0.6 below 1; LOI 4 above 2.5', 'CaO 0.5 below 1', 'FRESH'];
    const { because } = consensus(
      suiteFrom(
        flags.map(() => tholeiite),
        { labels: { alteration: flags } },
      ),
    );
    expect(because[0]).toMatch(/AFM \(Na2O moved\)/);
    expect(because[0]).not.toMatch(/K2O moved/);
    expect(because[1]).toMatch(/AFM \(Na2O, K2O moved\)/);
    expect(because[2]).toMatch(/AFM \(Na2O, K2O moved\)/);
    expect(because[4]).not.toMatch(/altered/);
    expect(because[3]).toMatch(/flagged as altered \(CaO 0.5 below 1\)\.$/);
  });

  it('says where normative nepheline and the dividing line disagree', () => {
    // SiO2 46.5, alkalis 3.2: below the line of Irvine & Baragar (3.4 there), yet short of silica.
    const made = consensus(suiteFrom([rock({ SiO2: 46.5, Na2O: 2.9, K2O: 0.3, CaO: 12, MgO: 9, FeOT: 9 })]));
    expect(made.names.names[0]).toBe('alkali basalt');
    expect(made.because[0]).toMatch(/norm has nepheline, so the IUGS name is alkali basalt all the same/);
  });

  it('an alkaline rock is not asked for the subalkaline series', () => {
    const made = consensus(suiteFrom([rock({ SiO2: 46, Na2O: 4.5, K2O: 2, CaO: 9 })]));
    expect(made.reading[0]).toBe('alkaline');
    expect(made.because[0]).toMatch(/^Alkaline by alkalinity, so the subalkaline series are not asked/);
  });
});

describe('explain', () => {
  const suite = suiteFrom([{ ...rock({ SiO2: 57.1, Na2O: 2.5, K2O: 0.5 }), LOI: 2 }], {
    labels: { sample: ['KE-12'] },
    sigma: { SiO2: 0.4, K2O: 0.03 },
  });

  it('goes from cell to verdict', () => {
    const { steps, sample } = explain(classify(suite, ['tas', 'adakite-1990']), 'KE-12');
    expect(sample).toBe('KE-12');
    expect(steps.find(({ stage, what }) => stage === 'cell' && what === 'SiO2')).toMatchObject({ value: '57.1 wt % ± 0.4' });
    expect(steps.find(({ stage, what }) => stage === 'cell' && what === 'K2O')!.value).toBe('0.5 wt % ± 0.03');
    expect(steps.find(({ stage }) => stage === 'recast')!.detail).toBe('oxides sum to 100 wt % as given');
    expect(steps.filter(({ stage }) => stage === 'axis').map(({ value }) => value)).toEqual(['57.1 wt %', '3 wt %']);
    const verdict = steps.find(({ what }) => what.startsWith('Total alkali'))!;
    expect(verdict.value).toBe('O2: andesite');
    expect(verdict.detail).toMatch(/from the nearest boundary; andesite \d+ %, basaltic andesite \d+ %/);
    expect(verdict.sources).toContain('Le Bas et al. 1986');
    expect(steps.find(({ what }) => what === 'Sr ≥ 400')!.value).toBe('not known');
  });

  it('explains names and readings too, and refuses what it does not know', () => {
    const named = explain(nameRocks(suite), 0).steps;
    expect(named.at(-1)).toMatchObject({ stage: 'verdict', value: 'low-K andesite' });
    expect(explain(consensus(suite), 'KE-12').steps.at(-1)!.stage).toBe('reading');
    expect(() => explain(classify(suite, 'tas'), 'KE-13')).toThrow(/no sample "KE-13"/);
    expect(() => explain(undefined as never, 'KE-12')).toThrow(TypeError);
  });
});

describe('withVerdicts', () => {
  const suite = suiteFrom([rock({ SiO2: 57.1, Na2O: 2.5, K2O: 0.5 }), rock({ K2O: NaN })], { sigma: { SiO2: 0.4 } });

  it('writes symbols, names, distances and probabilities into the suite', () => {
    const made = withVerdicts(classify(suite, ['tas', 'iron-enrichment']));
    expect(made.label('tas')).toEqual(['O2', '']);
    expect(made.label('tas name')).toEqual(['andesite', '']);
    expect(made.values('tas distance')[1]).toBeNaN();
    expect(made.values('tas probability')[0]).toBeGreaterThan(0.5);
    expect(made.lineage.map(({ what }) => what)).toEqual(['volatileFree', 'classify', 'withVerdicts']);
    expect(suite.labels.has('tas')).toBe(false);
  });

  it('gives the labels that other functions ask for', () => {
    const named = withVerdicts(nameRocks(suite));
    expect([...named.groupBy('rock').keys()]).toEqual(['low-K andesite', '']);
    // The label `tas` is what the split of iron by rock type (Middlemost 1989) reads.
    const split = splitIron(named, { method: 'middlemost-1989' });
    expect(split.values('Fe2O3')[0] / split.values('FeO')[0]).toBeCloseTo(0.35, 12);
    expect(withVerdicts(consensus(suite)).label('reading')[0]).toMatch(/low-K/);
    expect(() => withVerdicts({} as never)).toThrow(TypeError);
  });
});
