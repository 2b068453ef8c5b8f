import { describe, expect, it } from 'vitest';
import { audit, cellState, column, precisionLine, rockMaterial, rockMaterialNames, seededRandom, suiteOf, type Column, type Suite } from 'wedgework';

const normals = (seed: number): (() => number) => seededRandom(seed, 'tests').normal;

const analytes = [
  'SiO2',
  'TiO2',
  'Al2O3',
  'Fe2O3T',
  'MnO',
  'MgO',
  'CaO',
  'Na2O',
  'K2O',
  'P2O5',
  'Rb',
  'Sr',
  'Y',
  'Zr',
  'Nb',
  'Ba',
  'La',
  'Ce',
  'Nd',
  'Sm',
  'Yb',
  'Th',
];

/** A batch: runs of a reference material among invented samples; `bias` by analyte, 1 % noise. */
function batch(options: { runs: number; samples: number; bias?: Readonly<Record<string, number>>; noise?: number; seed?: number }): {
  names: string[];
  rows: number[][];
} {
  const normal = normals(options.seed ?? 11);
  const certified = rockMaterial('BHVO-2').values;
  const names: string[] = [];
  const rows: number[][] = [];
  const total = options.runs + options.samples;
  for (let i = 0; i < total; i++) {
    const isRun = i % Math.floor(total / options.runs) === 0 && names.filter((name) => name.startsWith('BHVO')).length < options.runs;
    names.push(isRun ? (i === 0 ? 'BHVO2 std' : `BHVO-2 #${i}`) : `KE-${i}`);
    const scale = 0.6 + (0.9 * ((i * 7) % 10)) / 10;
    rows.push(
      analytes.map((symbol, j) => {
        const truth = isRun ? certified.get(symbol)!.value : certified.get(symbol)!.value * (symbol === 'SiO2' ? 1.1 : scale * (1 + 0.05 * (j % 3)));
        return truth * (1 + (options.bias?.[symbol] ?? 0)) * (1 + (options.noise ?? 0.01) * normal());
      }),
    );
  }
  return { names, rows };
}

const suiteFrom = ({ names, rows }: { names: string[]; rows: number[][] }): Suite =>
  suiteOf({ columns: analytes.map((symbol, j) => column({ symbol, values: rows.map((row) => row[j]) })), labels: { sample: names } });

describe('reference materials', () => {
  it('carries more than twenty materials, each from one source with its standing', () => {
    expect(rockMaterialNames().length).toBeGreaterThan(20);
    for (const name of rockMaterialNames()) expect(rockMaterial(name).values.size).toBeGreaterThan(6);
  });

  it('gives the certified values as printed', () => {
    // U.S. Geological Survey 1998, certificate of BHVO-2: SiO2 49.9 ± 0.6 wt %, Ba 130 ± 13 ppm, Sr 389 ± 23 ppm
    const usgs = rockMaterial('BHVO-2', 'usgs_bhvo2_1998').values;
    expect(usgs.get('SiO2')).toMatchObject({ value: 49.9, sigma: 0.6 });
    expect(usgs.get('Ba')).toMatchObject({ value: 130, sigma: 13 });
    expect(usgs.get('Sr')).toMatchObject({ value: 389, sigma: 23 });
    // Jochum et al. 2016, BHVO-1: Ba 134.4 ± 2.5 ppm at 95 %, so 1σ is half of that
    expect(rockMaterial('BHVO-1', 'jochum_2016').values.get('Ba')).toMatchObject({ value: 134.4, sigma: 1.25 });
  });

  it('finds a planted bias of 3 % and calls the others fit', () => {
    const checked = audit(suiteFrom(batch({ runs: 8, samples: 40, bias: { Zr: 0.03, Ba: -0.03 }, noise: 0.005 })));
    const verdicts = new Map(checked.accuracy.map((each) => [each.analyte, each]));
    expect(verdicts.get('Zr')).toMatchObject({ verdict: 'biased', runs: 8 });
    expect(verdicts.get('Zr')!.bias).toBeCloseTo(3, 0);
    expect(verdicts.get('Ba')).toMatchObject({ verdict: 'biased' });
    expect(verdicts.get('Ba')!.bias).toBeCloseTo(-3, 0);
    expect(
      checked.accuracy
        .filter(({ verdict }) => verdict === 'biased')
        .map(({ analyte }) => analyte)
        .sort(),
    ).toEqual(['Ba', 'Zr']);
  });

  it('gives recovery and z-score against the certified value and its 1σ', () => {
    const { values } = rockMaterial('BHVO-2');
    const zr = values.get('Zr')!;
    const made = batch({ runs: 2, samples: 6, noise: 0 });
    made.rows[0][analytes.indexOf('Zr')] = zr.value + 2 * zr.sigma;
    const [first] = audit(suiteFrom(made)).recoveries.filter(({ analyte, row }) => analyte === 'Zr' && row === 0);
    expect(first.z).toBeCloseTo(2, 9);
    expect(first.recovery).toBeCloseTo((100 * (zr.value + 2 * zr.sigma)) / zr.value, 9);
  });

  it('finds a planted exchange of a reference material and a sample', () => {
    const made = batch({ runs: 6, samples: 30 });
    const control = made.names.findIndex((name) => name.startsWith('BHVO-2 #'));
    const other = control + 2;
    [made.rows[control], made.rows[other]] = [made.rows[other], made.rows[control]];
    const checked = audit(suiteFrom(made));
    expect(checked.mixUps).toHaveLength(1);
    expect(checked.mixUps[0]).toMatchObject({ row: control, fits: other, expected: 'BHVO-2' });
    expect(checked.pleaseCheck.some((text) => text.includes('exchanged'))).toBe(true);
  });

  it('finds a planted exchange of two samples by their duplicates', () => {
    const made = batch({ runs: 2, samples: 20 });
    const at = (name: string) => made.names.indexOf(name);
    for (const name of ['KE-3', 'KE-5', 'KE-8', 'KE-9']) {
      made.names.push(`${name} dup`);
      made.rows.push(made.rows[at(name)].map((value) => value * 1.004));
    }
    [made.rows[at('KE-3')], made.rows[at('KE-8')]] = [made.rows[at('KE-8')], made.rows[at('KE-3')]];
    const checked = audit(suiteFrom(made));
    expect(checked.unlikePairs.map(({ sample }) => sample).sort()).toEqual(['KE-3', 'KE-8']);
    // The exchanged pairs do not spoil the precision of the others: two values 0.4 % apart have a standard deviation of 0.4 %/√2.
    expect(checked.duplicates.find(({ analyte }) => analyte === 'Zr')!.relative).toBeCloseTo(0.4 / Math.SQRT2, 2);
  });

  it('takes a sample that only has the short name of a material as a sample', () => {
    const made = batch({ runs: 2, samples: 10 });
    made.names[3] = 'W-2';
    expect(audit(suiteFrom(made)).suite.samples).toContain('W-2');
  });

  it('takes reference materials and blanks out of the suite, and says so', () => {
    const made = batch({ runs: 4, samples: 12 });
    made.names.push('Blank 1');
    made.rows.push(analytes.map(() => 0.01));
    const checked = audit(suiteFrom(made));
    expect(checked.suite.size).toBe(12);
    expect(checked.takenOut).toHaveLength(5);
    expect(audit(suiteFrom(made), { keep: 'all' }).suite.size).toBe(17);
  });

  it('sees a drifting run on the control chart', () => {
    const made = batch({ runs: 10, samples: 30, noise: 0.002 });
    const runs = made.names.flatMap((name, row) => (name.startsWith('BHVO') ? [row] : []));
    made.rows[runs[6]][analytes.indexOf('Y')] *= 1.1;
    const { chart } = audit(suiteFrom(made)).accuracy.find(({ analyte }) => analyte === 'Y')!;
    expect(chart.some((text) => text.startsWith(`row ${runs[6] + 1} `))).toBe(true);
  });
});

describe('duplicates', () => {
  it('recovers a planted precision line (Thompson & Howarth 1976)', () => {
    // 1σ = 0.5 + 0.03 c
    const normal = normals(5);
    const pairs = Array.from({ length: 600 }, (_, i) => {
      const c = 2 + (i % 150);
      const s = 0.5 + 0.03 * c;
      const [a, b] = [c + s * normal(), c + s * normal()];
      return { centre: (a + b) / 2, difference: Math.abs(a - b) };
    });
    const line = precisionLine(pairs)!;
    expect(line.slope).toBeGreaterThan(0.03 * 0.85);
    expect(line.slope).toBeLessThan(0.03 * 1.15);
    expect(line.intercept).toBeGreaterThan(0.2);
    expect(line.intercept).toBeLessThan(0.8);
    expect(precisionLine(pairs.slice(0, 49))).toBeUndefined();
  });

  it('pools the precision of pairs by hand calculation', () => {
    // s² of a pair is d²/2; relative to the mean: (2/√2/101)² and (6/√2/203)², pooled over two degrees of freedom
    const suite = suiteOf({
      columns: [column({ symbol: 'Ba', values: [100, 102, 200, 206, 50] })],
      labels: { sample: ['A', 'A', 'B', 'B dup', 'C'] },
    });
    const [ba] = audit(suite).duplicates;
    const byHand = 100 * Math.sqrt(((2 / Math.SQRT2 / 101) ** 2 + (6 / Math.SQRT2 / 203) ** 2) / 2);
    expect(ba).toMatchObject({ groups: 2, degreesOfFreedom: 2 });
    expect(ba.relative).toBeCloseTo(byHand, 12);
  });
});

describe('compilations', () => {
  it('do not take names that many papers reuse as duplicates, and say so in one line', () => {
    const made = batch({ runs: 2, samples: 30 });
    const again = made.names.flatMap((name, row) => (name.startsWith('KE-') ? [row] : [])).slice(0, 12);
    for (const row of again) {
      made.names.push(made.names[row]);
      made.rows.push(made.rows[row].map((value, j) => value * (j % 2 === 0 ? 1.8 : 0.5)));
    }
    const checked = audit(suiteFrom(made));
    expect(checked.duplicates).toEqual([]);
    expect(checked.pleaseCheck.filter((text) => /equal names are not taken as duplicates/.test(text))).toHaveLength(1);
    expect(checked.pleaseCheck.length).toBeLessThan(10);
  });
});

describe('uncertainty of the columns', () => {
  const named = (found: ReturnType<typeof audit>, symbol: string) => found.sigmas.find(({ analyte }) => analyte === symbol)!;

  it('comes from duplicates, else from reference materials, else from the user, else from nowhere', () => {
    const made = batch({ runs: 3, samples: 12 });
    const ofSamples = (value: number) => made.names.map((name) => (name.startsWith('BHVO') ? NaN : value));
    const suite = suiteFrom(made).with([column({ symbol: 'Cs', values: ofSamples(1.5) }), column({ symbol: 'W', values: ofSamples(0.8) })]);
    const checked = audit(suite, { sigma: { Cs: { percent: 4 } } });
    expect(named(checked, 'Zr').from).toBe('reference materials');
    expect(named(checked, 'Cs')).toMatchObject({ from: 'stated by the user', typical: 0.06 });
    expect(named(checked, 'W').from).toBe('none');
    expect(checked.suite.column('W').sigma).toBeUndefined();
    const twice = {
      names: [...made.names, 'KE-1', 'KE-2', 'KE-4'],
      rows: [...made.rows, ...[1, 2, 4].map((row) => made.rows[row].map((value) => value * 1.02))],
    };
    expect(named(audit(suiteFrom(twice)), 'Zr').from).toBe('duplicates');
  });

  it('is NaN where there is no value', () => {
    const made = suiteFrom(batch({ runs: 3, samples: 12 }));
    const zr = made.column('Zr');
    const states = zr.states.slice();
    const values = zr.values.slice();
    const sample = made.samples.indexOf('KE-2');
    states[sample] = cellState.belowDetection;
    values[sample] = NaN;
    const checked = audit(made.with([column({ symbol: 'Zr', values, states, limits: values.map(() => NaN) })])).suite;
    expect(checked.column('Zr').sigma![checked.samples.indexOf('KE-2')]).toBeNaN();
    expect(checked.column('Zr').states[checked.samples.indexOf('KE-2')]).toBe(cellState.belowDetection);
  });
});

describe('totals and blanks', () => {
  const lava = { SiO2: 55, TiO2: 0.8, Al2O3: 17, Fe2O3T: 8, MnO: 0.15, MgO: 4.5, CaO: 8, Na2O: 3.3, K2O: 1.2, P2O5: 0.2 };
  const oneRow = (more: Record<string, number>) =>
    suiteOf({
      columns: Object.entries({ ...lava, ...more }).map(([symbol, value]) => column({ symbol, values: [value] })),
      labels: { sample: ['A'] },
    });

  it('sums oxides with iron as reported, with LOI, and with the oxygen of F and Cl taken off', () => {
    const sum = 98.15;
    expect(audit(oneRow({})).totals.oxides[0]).toBeCloseTo(sum, 10);
    expect(audit(oneRow({ LOI: 1.1 })).totals.withVolatiles[0]).toBeCloseTo(sum + 1.1, 10);
    // Handbook factors: O = 0.4211 F and 0.2256 Cl (IUPAC weights; as printed with published analyses)
    const halogens = audit(oneRow({ F: 1000, Cl: 2000 })).totals;
    expect(halogens.oxygenOfHalogens[0]).toBeCloseTo(0.1 * 0.4211 + 0.2 * 0.2256, 4);
    expect(halogens.withVolatiles[0]).toBeCloseTo(sum + 0.3 - (0.1 * 0.4211 + 0.2 * 0.2256), 4);
  });

  it('says low, high and what a total lacks', () => {
    expect(audit(oneRow({ LOI: 6 })).totals.verdict).toEqual(['high']);
    expect(audit(oneRow({ SiO2: 40, LOI: 1 })).totals.verdict).toEqual(['low']);
    expect(audit(oneRow({ Na2O: NaN })).totals.words[0]).toContain('Na2O');
    expect(audit(oneRow({ LOI: 6 }), { totals: { to: 105 } }).totals.verdict).toEqual(['in window']);
  });

  it('takes mean + 3 s of the blanks as detection limit', () => {
    const suite = suiteOf({
      columns: [column({ symbol: 'Zn', values: [1, 2, 3, 4, 90] })],
      labels: { sample: ['blank', 'Blank-2', 'procedural blank 3', 'A', 'B'] },
    });
    expect(audit(suite).blanks).toEqual([{ analyte: 'Zn', blanks: 3, mean: 2, limit: 5, samplesBelow: 1 }]);
  });
});

describe('alteration', () => {
  const fresh: Record<string, number> = {
    SiO2: 55,
    TiO2: 0.8,
    Al2O3: 17,
    Fe2O3T: 8,
    MnO: 0.15,
    MgO: 4.5,
    CaO: 8,
    Na2O: 3.3,
    K2O: 1.2,
    P2O5: 0.2,
    LOI: 0.8,
    La: 10,
    Ce: 23,
    Pr: 3.1,
    Nd: 13,
  };
  const many = (changes: Record<string, number>[], more: Column[] = []) =>
    suiteOf({
      columns: [
        ...Object.keys({ ...fresh, ...Object.assign({}, ...changes) }).map((symbol) =>
          column({ symbol, values: changes.map((change) => change[symbol] ?? fresh[symbol] ?? NaN) }),
        ),
        ...more,
      ],
      labels: { sample: changes.map((_, i) => `S-${i + 1}`) },
    });

  it('calls a fresh andesite fresh and gives it an empty label', () => {
    const { alteration, suite } = audit(many([{}]));
    expect(alteration.verdict).toEqual(['fresh']);
    expect(suite.label('alteration')).toEqual(['']);
  });

  it('flags volatiles beyond the IUGS limits (Le Maitre et al. 2002: H2O+ > 2 %, CO2 > 0.5 %) with the reason', () => {
    const { alteration, suite } = audit(many([{ 'H2O+': 2.4 }, { CO2: 0.7 }, { 'H2O+': 1.9, CO2: 0.4 }, { LOI: 4.1 }]));
    expect(alteration.verdict).toEqual(['altered', 'altered', 'fresh', 'altered']);
    expect(suite.label('alteration')[0]).toContain('H2O+ 2.4 above 2');
    expect(suite.label('alteration')[3]).toContain('LOI 4.1');
  });

  it('takes one hint as suspect and two as altered', () => {
    const { alteration } = audit(many([{ Ce: 14 }, { Ce: 14, CaO: 0.8 }]));
    expect(alteration.verdict).toEqual(['suspect', 'altered']);
    expect(alteration.reason[0]).toMatch(/^Ce\/Ce\* 0\.\d+ below 0\.9$/);
  });

  it('computes the indices of the literature by hand', () => {
    const { quantities } = audit(many([{}])).alteration;
    // Ishikawa 1976: 100 (K2O + MgO) / (K2O + MgO + Na2O + CaO)
    expect(quantities.get('AI')![0]).toBeCloseTo((100 * 5.7) / 17, 10);
    // Nesbitt & Young 1982, molar, CaO less that of apatite; masses IUPAC
    const al = 17 / 101.961;
    const ca = 8 / 56.077 - (10 / 3) * (0.2 / 141.943);
    expect(quantities.get('CIA')![0]).toBeCloseTo((100 * al) / (al + ca + 3.3 / 61.979 + 1.2 / 94.195), 2);
  });

  it('finds a mobile element out of line with an immobile one, and names it', () => {
    const normal = normals(3);
    const changes = Array.from({ length: 30 }, (_, i) => {
      const th = 1 + i * 0.2;
      return { Th: th, Rb: 12 * th * (1 + 0.05 * normal()) * (i === 17 ? 0.2 : 1) };
    });
    const { verdict, reason } = audit(many(changes)).alteration;
    expect(verdict.flatMap((each, i) => (each === 'suspect' ? [i] : []))).toEqual([17]);
    expect(reason[17]).toMatch(/^Rb 0\.\d+ times what Th allows$/);
  });

  it('can be given other limits, or left out rule by rule', () => {
    expect(audit(many([{ LOI: 4 }]), { alteration: { 'loss-on-ignition': { high: 5 } } }).alteration.verdict).toEqual(['fresh']);
    expect(audit(many([{ LOI: 4 }]), { alteration: { 'loss-on-ignition': null } }).alteration.verdict).toEqual(['fresh']);
  });
});

describe('bad input', () => {
  const suite = suiteOf({ columns: [column({ symbol: 'Ba', values: [1, 2] })], labels: { sample: ['A', 'B'] } });
  it.each([
    [{ keep: 'some' }, /keep must be/],
    [{ tolerance: -1 }, /tolerance/],
    [{ duplicates: 'batch' }, /no label "batch"/],
    [{ sigma: { Xx: { percent: 3 } } }, /no column "Xx"/],
    [{ sigma: { Ba: { percent: 0 } } }, /above 0/],
    [{ certificate: {} }, /no option "certificate"/],
  ])('%j is refused in words', (options, message) => {
    expect(() => audit(suite, options as never)).toThrow(message);
  });

  it('audits an empty column set and a suite of one row without failing', () => {
    expect(audit(suiteOf({ columns: [], labels: { sample: ['A'] } })).suite.size).toBe(1);
    expect(audit(suite.rows([0])).pleaseCheck).toEqual([]);
  });
});
