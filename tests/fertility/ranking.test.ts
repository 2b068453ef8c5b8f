import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  explainFertility,
  fertilityIndicators,
  fertilityWeights,
  findSource,
  rankGroups,
  screenFertility,
  sources,
  standingCautions,
} from 'wedgework';
import { intrusions, suiteLike } from './made-suites';

const sound = { SiO2: 62, Sr: 700, Y: 10, V: 150, Sc: 10, La: 25, Yb: 1 };
const poor = { SiO2: 62, Sr: 250, Y: 22, V: 60, Sc: 12, La: 10, Yb: 2.5 };

describe('the planted batch of 3,000 assays', () => {
  const { suite, truth } = intrusions();
  const screen = screenFertility(suite, { group: 'intrusion' });
  const of = (name: string) => screen.groups.find(({ group }) => group === name)!;
  const fertile = truth.filter(({ kind }) => kind === 'fertile').map(({ name }) => name);

  it('is as planned', () => {
    expect([suite.size, truth.length, fertile.length]).toEqual([3000, 20, 4]);
  });

  it('ranks the four fertile groups first', () => {
    expect(
      screen.groups
        .slice(0, 4)
        .map(({ group }) => group)
        .sort(),
    ).toEqual([...fertile].sort());
    for (const group of screen.groups.slice(0, 4)) expect(group.ranks.worst).toBeLessThanOrEqual(4);
  });

  it('supports those that two independent lines speak for, and no other', () => {
    expect(
      screen.groups
        .filter(({ verdict }) => verdict === 'supported')
        .map(({ group }) => group)
        .sort(),
    ).toEqual(['Ambrel stock', 'Ludrin dykes', 'Torvane porphyry']);
  });

  it('names what the group without Sc is missing', () => {
    const keshal = of('Keshal stock');
    expect(keshal).toMatchObject({ verdict: 'undecided', because: 'one line of evidence only (Sr–Y)', agreement: 'one line only' });
    // Four of four is the fewest with a Wilson low end over 0.5 (0.5101; three of three: 0.4385).
    expect(keshal.further).toMatchObject({ indicators: ['v-sc-2014'], analytes: ['Sc'], samples: 4, on: 'samples in hand' });
    expect(keshal.further!.text).toMatch(/^Sc on 4 of \d+ samples that lack it/);
    expect(screen.cautions.join(' ')).toMatch(/V\/Sc above the silica line \(Loucks 2014\): not measured in \d+ samples/);
  });

  it('does not count altered samples, whose strontium was gained', () => {
    const ostrel = of('Ostrel pluton');
    const row = screen.answers.find(({ indicator }) => indicator.key === 'sr-y-2014')!;
    const ostrelRows = suite.label('intrusion').flatMap((name, i) => (name === 'Ostrel pluton' ? [i] : []));
    const wouldMeet = ostrelRows.filter((i) => row.withoutGuards[i] === 0).length;
    expect(wouldMeet).toBeGreaterThan(100);
    expect(ostrel.tallies.find(({ indicator }) => indicator === 'sr-y-2014')!.met).toBe(0);
    expect(ostrel.struckOut).toBeGreaterThan(160);
    expect(ostrel.verdict).toBe('not supported');
  });

  it('leaves cumulates out, and tells lines that disagree', () => {
    expect(of('Ravenor complex').leftOut).toBeGreaterThan(40);
    expect(of('Pendari stock')).toMatchObject({ verdict: 'undecided', agreement: 'disagree' });
    expect(of('Quillow pluton').verdict).toBe('undecided');
  });

  it('reads trends on groups', () => {
    const trend = (group: string, key: string) => of(group).trends.find(({ indicator }) => indicator === key)!;
    expect(trend('Marvoe pluton', 'copper-trend').reading).toContain('sulphide saturated early');
    expect(trend('Marvoe pluton', 'dy-yb-trend').direction).toBe('falling');
    expect(trend('Keshal stock', 'dy-yb-trend').direction).toBe('too few samples');
  });

  it('gives the same bytes again, whatever the order of the rows', () => {
    const again = screenFertility(suite.rows(Array.from({ length: suite.size }, (_, i) => suite.size - 1 - i)), { group: 'intrusion' });
    const plain = (groups: typeof screen.groups) =>
      groups.map(({ group, rank, score, low, high, verdict }) => ({ group, rank, score, low, high, verdict }));
    expect(plain(again.groups)).toEqual(plain(screen.groups));
    expect(JSON.stringify(screenFertility(suite, { group: 'intrusion' }).groups)).toBe(JSON.stringify(screen.groups));
  });

  it('explains a struck-out sample', () => {
    const row = suite.label('alteration').findIndex((text, i) => text !== '' && suite.label('intrusion')[i] === 'Torvane porphyry');
    const table = explainFertility(screen, suite.samples[row]);
    expect(table.rows[0].join(' ')).toMatch(/struck out \((met|not met)\)/);
    expect(table.notes!.join(' ')).toContain('Flagged: altered (label) (struck out)');
    expect(() => explainFertility(screen, 'nowhere')).toThrow('there is no sample "nowhere"');
  });
});

describe('the score', () => {
  it('is the weighted mean of the shares that could be asked', () => {
    // Sr/Y met by 2 of 4, V/Sc by 4 of 4, La/Yb by 0 of 4: (0.5·1 + 1·1 + 0·0.5)/2.5 = 0.6.
    const changes = [0, 1, 2, 3].map((i) => ({ ...sound, Sr: i < 2 ? 700 : 300, La: 5 }));
    const [group] = screenFertility(suiteLike(changes), { group: 'unit' }).groups;
    expect(group.score).toBeCloseTo(0.6, 12);
    const without = screenFertility(suiteLike(changes.map((change) => ({ ...change, Sc: NaN }))), { group: 'unit' }).groups[0];
    expect(without.score).toBeCloseTo(0.5 / 1.5, 12);
    expect(without.low).toBeLessThan(without.score);
    expect(without.high).toBeGreaterThan(without.score);
  });

  it('lies between 0 and 1 inside its interval, and never falls when a sample turns from not met to met', () => {
    const asked = fc.array(fc.record({ srY: fc.boolean(), vSc: fc.boolean(), laYb: fc.boolean() }), { minLength: 1, maxLength: 12 });
    fc.assert(
      fc.property(asked, fc.nat(11), (samples, at) => {
        const scoreOf = (of: typeof samples) =>
          screenFertility(
            suiteLike(
              of.map(({ srY, vSc, laYb }) => ({
                SiO2: 62,
                ...(srY ? { Sr: 700, Y: 10 } : { Sr: 250, Y: 22 }),
                V: vSc ? 150 : 60,
                Sc: 10,
                La: laYb ? 25 : 5,
                Yb: 1,
              })),
            ),
            { group: 'unit', draws: 1 },
          ).groups[0];
        const before = scoreOf(samples);
        const after = scoreOf(samples.map((sample, i) => (i === at % samples.length ? { srY: true, vSc: true, laYb: true } : sample)));
        expect(before.score).toBeGreaterThanOrEqual(before.low - 1e-12);
        expect(before.score).toBeLessThanOrEqual(before.high + 1e-12);
        expect(after.score).toBeGreaterThanOrEqual(before.score - 1e-12);
      }),
      { numRuns: 40 },
    );
  });

  it('supports with two lines, stays open with one, and says against', () => {
    const verdict = (change: object, count = 6) =>
      screenFertility(suiteLike(Array.from({ length: count }, () => change as never)), { group: 'unit' }).groups[0];
    expect(verdict(sound).verdict).toBe('supported');
    expect(verdict({ ...sound, Sc: NaN, Yb: NaN })).toMatchObject({ verdict: 'undecided', because: 'one line of evidence only (Sr–Y)' });
    expect(verdict(poor).verdict).toBe('not supported');
    expect(verdict({ ...sound, V: 60 })).toMatchObject({ verdict: 'undecided', agreement: 'disagree' });
    expect(verdict({ SiO2: 45 })).toMatchObject({ verdict: 'cannot be asked', rank: 1 });
    expect(verdict(sound, 2)).toMatchObject({ verdict: 'undecided', because: 'the interval spans the cut' });
  });

  it('asks for new samples where those in hand cannot settle it', () => {
    const [group] = screenFertility(suiteLike([sound, sound]), { group: 'unit' }).groups;
    // Two of two give a Wilson low end of 0.342; four of four is the fewest over 0.5 (0.5101), so two more that are like them.
    expect(group.further).toMatchObject({
      on: 'new samples',
      samples: 2,
      analytes: ['Sr', 'Y', 'V', 'Sc', 'La', 'Yb'],
      outcomes: [{ if: 'as so far', verdict: 'supported' }],
    });
  });
});

describe('weights', () => {
  const suite = suiteLike([...Array(6).fill({ ...sound, V: 60 }), ...Array(6).fill({ ...sound, Sr: 250, Y: 22, La: 5 })], {
    labels: { unit: [...Array(6).fill('high Sr/Y'), ...Array(6).fill('high V/Sc')] },
  });
  const screen = screenFertility(suite, { group: 'unit' });

  it('change the rank, and the table of weights is what is used', () => {
    expect(fertilityWeights().map(({ indicator, weight }) => [indicator, weight])).toEqual([
      ['sr-y-2014', 1],
      ['v-sc-2014', 1],
      ['la-yb-1986', 0.5],
    ]);
    expect(screen.groups.map(({ group }) => group)).toEqual(['high Sr/Y', 'high V/Sc']);
    expect(screen.groups[0].score).toBeCloseTo(1.5 / 2.5, 12);
    const other = rankGroups(screen, { weights: { 'v-sc-2014': 5 } });
    expect(other.groups.map(({ group }) => group)).toEqual(['high V/Sc', 'high Sr/Y']);
    expect(other.groups[0].score).toBeCloseTo(5 / 6.5, 12);
    expect(rankGroups(other).groups[0].group).toBe('high V/Sc');
    expect(screen.groups[0].group).toBe('high Sr/Y');
  });

  it('are varied to show how firm a rank is, by a seed in the lineage', () => {
    expect(screen.groups.map(({ ranks }) => [ranks.best, ranks.worst])).toEqual([
      [1, 2],
      [1, 2],
    ]);
    expect(rankGroups(screen, { spread: 1 }).groups.map(({ ranks }) => [ranks.best, ranks.worst])).toEqual([
      [1, 1],
      [2, 2],
    ]);
    expect(screen.lineage.at(-1)!.detail).toMatchObject({ seed: 7946, draws: 1000, weights: expect.objectContaining({ 'sr-y-2014': 1 }) });
    const share = (seed: number) => rankGroups(screen, { seed, first: 1 }).groups[0].ranks.amongFirst;
    expect(share(1)).toBe(share(1));
    expect(share(1)).not.toBe(share(2));
    // With weights a, b, c times log-uniform factors the first group leads when a + c/2 > b: by symmetry more often than not.
    expect(share(1)).toBeGreaterThan(0.5);
    expect(share(1)).toBeLessThan(1);
  });
});

describe('what every result carries', () => {
  const screen = screenFertility(suiteLike([sound]), { group: 'unit' });

  it('holds the cautions and the check on labelled districts', () => {
    for (const caution of [...standingCautions, screen.calibration.statement]) expect(screen.cautions).toContain(caution);
    const bundle = screen.toMimeBundle() as Record<string, string>;
    expect(bundle['text/plain']).toContain('competent');
    expect(bundle['text/html']).toContain('it does not find ore');
  });

  it('names sources that the bibliography holds, methods in a sentence, and limits recalled from memory', () => {
    for (const key of screen.sources) expect(findSource(key).id).toBe(key);
    const found = sources(screen);
    expect(found.keys).toEqual(expect.arrayContaining(['loucks_2014', 'martin_1986', 'wilson_1927', 'georoc_convergent_margins_2022']));
    expect(found.methods).toContain('weighted share of samples that meet Sr/Y > 35 (Loucks 2014; weight 1)');
    expect(found.fromMemory.join(' ')).toContain('Sr/Y > 35');
  });

  it('gives every indicator a window, a source and limits of use', () => {
    for (const { limits, source } of fertilityIndicators()) {
      expect(limits.length).toBeGreaterThan(20);
      expect(findSource(source).title).not.toBe('');
    }
  });
});

describe('bad input', () => {
  const suite = suiteLike([sound]);
  it.each([
    [{}, 'group must name a label of the suite'],
    [{ group: 'volcano' }, 'It has: unit, sample'],
    [{ group: 'unit', weights: { 'sr-y': 1 } }, 'there is no criterion "sr-y". Known: sr-y-2014'],
    [{ group: 'unit', weights: { 'sr-y-2014': -1 } }, 'must be a number from 0 up'],
    [{ group: 'unit', weights: { 'sr-y-2014': 0, 'v-sc-2014': 0, 'la-yb-1986': 0 } }, 'all weights are 0'],
    [{ group: 'unit', cut: 1 }, 'cut must be a number between 0 and 1'],
    [{ group: 'unit', interval: 'wald' }, 'interval must be "wilson" or "clopper-pearson"'],
    [{ group: 'unit', basis: 'dry' }, 'basis must be "volatile-free" or "as given"'],
    [{ group: 'unit', rankBy: 'name' }, 'rankBy must be "low" or "score"'],
    [{ group: 'unit', draws: 0 }, 'draws must be a whole number'],
    [{ group: 'unit', spread: 0.5 }, 'spread must be a number from 1 up'],
    [{ group: 'unit', seed: 1.5 }, 'seed must be a whole number'],
    [{ group: 'unit', colour: 'red' }, 'there is no option "colour"'],
  ])('%j', (options, message) => {
    expect(() => screenFertility(suite, options as never)).toThrow(message);
  });

  it('refuses a label that makes every sample a group of its own in a large suite', () => {
    const large = suite.rows(new Int32Array(5001)).withLabels({ unit: Array.from({ length: 5001 }, (_, i) => `U${i}`) });
    expect(() => screenFertility(large, { group: 'unit' })).toThrow('makes 5001 groups; at most 5000 are ranked');
  });

  it('asks for the screening itself, and for a new one where samples must be asked anew', () => {
    const screen = screenFertility(suite, { group: 'unit' });
    expect(() => rankGroups({ ...screen })).toThrow('not a copy of it');
    expect(() => rankGroups(screen, { basis: 'as given' })).toThrow('call screenFertility with it');
  });

  it('screens a suite without oxides or traces as far as it goes', () => {
    const bare = suite.only(['SiO2', 'Sr', 'Y']);
    expect(screenFertility(bare, { group: 'unit' }).groups[0]).toMatchObject({ verdict: 'cannot be asked', asked: 0 });
    expect(screenFertility(bare, { group: 'unit' }).cautions.join(' ')).toContain("{ basis: 'as given' }");
    expect(screenFertility(bare, { group: 'unit', basis: 'as given' }).groups[0]).toMatchObject({ asked: 1, agreement: 'one line only' });
  });
});
