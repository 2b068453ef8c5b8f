import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { calibrateFertility, classify, fertilityVerdict, labelledDistricts, screenFertility, suiteOf, volatileFree } from 'wedgework';
import { suiteLike } from './made-suites';

const answers = Papa.parse<Record<string, string>>(readFileSync(join(__dirname, '../data/fertility/labelled-answers.csv'), 'utf8'), {
  header: true,
  skipEmptyLines: true,
}).data;

describe('the published analyses', () => {
  const suite = labelledDistricts();
  const screen = screenFertility(suite, { group: 'district' });
  const of = (key: string) => screen.answers.find(({ indicator }) => indicator.key === key)!;

  it('are the 30 samples of five districts, in the order of the answers', () => {
    expect(suite.samples).toEqual(answers.map((row) => row.sample));
    expect(suite.label('district')).toEqual(answers.map((row) => row.district));
    expect(suite.groupBy('district').size).toBe(5);
  });

  // Independently computed from the printed analyses; tolerance is half of the last digit given.
  it.each([
    ['sr-y-2014', 'Sr/Y', 2],
    ['v-sc-2014', 'V/Sc', 2],
    ['la-yb-1986', '(La/Yb)N', 3],
    ['eu-anomaly', 'Eu/Eu*', 3],
    ['sr-mno', 'Sr/MnO', 0],
  ] as const)('%s: %s', (key, column, digits) => {
    const { values } = of(key).values!;
    let compared = 0;
    answers.forEach((row, i) => {
      if (row[column] === '') return;
      expect(Math.abs(values[i] - Number(row[column]))).toBeLessThanOrEqual(0.5 * 10 ** -digits + 1e-9);
      compared++;
    });
    expect(compared).toBeGreaterThan(15);
  });

  it('have their silica on the volatile-free basis', () => {
    const silica = volatileFree(suite, { iron: 'measured' }).values('SiO2');
    answers.forEach((row, i) => expect(silica[i]).toBeCloseTo(Number(row['SiO2 volatile-free']), 2));
  });

  it('are high-K where the independent answer says so', () => {
    answers.forEach((row, i) => {
      const verdict = of('potassium-series').verdicts[i];
      if (verdict !== fertilityVerdict.notApplicable) expect(verdict === fertilityVerdict.met).toBe(row['K series'] === 'high-K');
    });
  });

  it('are high-K where the potassium-silica scheme says so, inside the silica in which its line is drawn', () => {
    const names = classify(suite, 'potassium-silica').schemes.get('potassium-silica')!.names;
    const { verdicts } = of('potassium-series');
    let compared = 0;
    verdicts.forEach((verdict, i) => {
      if (verdict === fertilityVerdict.notApplicable || names[i] === '') return;
      expect(verdict === fertilityVerdict.met).toBe(names[i] === 'high-K');
      compared++;
    });
    expect(compared).toBeGreaterThan(20);
  });

  it('meet the 1990 list where the independent answer says so', () => {
    answers.forEach((row, i) => {
      const verdict = of('high-sr-y-1990').verdicts[i];
      if (verdict === fertilityVerdict.met || verdict === fertilityVerdict.notMet)
        expect(verdict === fertilityVerdict.met).toBe(row['high Sr/Y 1990'] === 'True');
    });
  });

  it('separate Grasberg from the three barren arcs by score, and not Baguio (one sample)', () => {
    const scores = new Map(screen.groups.map(({ group, score }) => [group, score]));
    for (const barren of ['Seguam, Aleutians', 'Ijen, Java', 'Santorini, Aegean'])
      expect(scores.get('Grasberg Cu-Au, Papua')!).toBeGreaterThan(scores.get(barren)! + 0.3);
    expect(scores.get('Baguio district, Luzon')).toBe(0);
  });
});

describe('calibrateFertility', () => {
  it('leaves one district out at a time and says that five are too few', () => {
    const found = calibrateFertility();
    expect(found.hits).toMatchObject({ count: 1, of: 2 });
    expect(found.falseAlarms).toMatchObject({ count: 0, of: 3 });
    // Exact intervals: scipy 1.17.1, binomtest(1, 2) and (0, 3).
    expect([found.hits.low, found.hits.high, found.falseAlarms.high].map((value) => Number(value.toFixed(4)))).toEqual([0.0126, 0.9874, 0.7076]);
    expect(found.enough).toBe(false);
    expect(found.statement).toContain('too few districts');
    expect(found.statement).toContain('1 of 2 (95 %: 1–99 %)');
    expect(found.lineage.at(-1)!.sources).toContain('clopper_pearson_1934');
  });

  it('sets the cut without the district that is called', () => {
    // Scores 1, 1, 0, 0 would give the cut 0.5 to all; without the only two of a kind there is none to set.
    const [sound, poor] = [
      { SiO2: 62, Sr: 700, Y: 10 },
      { SiO2: 62, Sr: 200, Y: 20 },
    ];
    const of = (kinds: readonly (readonly [string, object])[]) =>
      calibrateFertility({
        labelled: suiteOf({
          ...suiteLike(kinds.map(([, change]) => change as never)),
          labels: { district: kinds.map((_, i) => `D${i}`), label: kinds.map(([label]) => label) },
          columns: suiteLike(kinds.map(([, change]) => change as never)).columns.values(),
        }),
        weights: { 'v-sc-2014': 0, 'la-yb-1986': 0 },
      });
    const even = of([
      ['fertile', sound],
      ['fertile', sound],
      ['barren', poor],
      ['barren', poor],
    ]);
    expect(even.districts.map(({ cut, called }) => [cut, called])).toEqual([
      [0.5, 'fertile'],
      [0.5, 'fertile'],
      [0.5, 'barren'],
      [0.5, 'barren'],
    ]);
    const lone = of([
      ['fertile', sound],
      ['barren', poor],
      ['barren', poor],
    ]);
    expect(lone.districts.map(({ called }) => called)).toEqual(['not asked', 'barren', 'barren']);
    expect(lone.statement).toContain('none could be asked');
    // A fertile district that scores like a barren one is missed: the cut of the others does not know it.
    expect(
      of([
        ['fertile', sound],
        ['fertile', poor],
        ['barren', poor],
        ['barren', poor],
      ]).hits,
    ).toMatchObject({ count: 1, of: 2 });
  });

  it('speaks of rates with ten districts of each kind', () => {
    const kinds = Array.from({ length: 20 }, (_, i) => (i % 2 === 0 ? { SiO2: 62, Sr: 700, Y: 10 } : { SiO2: 62, Sr: 200, Y: 20 }));
    const suite = suiteLike(kinds, {
      labels: { district: kinds.map((_, i) => `D${i}`), label: kinds.map((_, i) => (i % 2 === 0 ? 'fertile' : 'barren')) },
    });
    const found = calibrateFertility({ labelled: suite });
    expect([found.enough, found.hits.count, found.falseAlarms.count]).toEqual([true, 10, 0]);
    expect(found.statement).not.toContain('too few');
  });

  it('refuses labels that it cannot read', () => {
    const labels = (label: readonly string[]) => ({ labelled: suiteLike([{}, {}], { labels: { district: ['A', 'A'], label } }) });
    expect(() => calibrateFertility(labels(['fertile', 'barren']))).toThrow('"A" has both labels');
    expect(() => calibrateFertility(labels(['rich', 'rich']))).toThrow('give "fertile" or "barren"');
    expect(() => calibrateFertility({ labelled: suiteLike([{}]) })).toThrow('no label "district"');
  });
});
