import { mkdtempSync, writeFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { classify, diagrams, explain, schemes, verdictOf } from 'wedgework';
import { rock, suiteFrom } from './suites';

const folder = mkdtempSync(join(tmpdir(), 'own-scheme-'));
afterAll(() => rmSync(folder, { recursive: true }));

const own = {
  key: 'my-zr-ti',
  title: 'Zr–Ti of the northern lavas',
  kind: 'polygons',
  sources: ['our own field report, 2024'],
  basis: 'as-analysed',
  axes: [
    { expression: 'Zr', title: 'Zr', unit: 'ppm', scale: 'log' },
    { expression: 'Ti / 1000', title: 'Ti / 1000', unit: 'ppm' },
  ],
  frame: { x: [10, 1000], y: [0, 20] },
  fields: [
    {
      symbol: 'N',
      name: 'northern',
      vertices: [
        [10, 0],
        [100, 0],
        [100, 20],
        [10, 20],
      ],
    },
    {
      symbol: 'S',
      name: 'southern',
      vertices: [
        [100, 0],
        [1000, 0],
        [1000, 20],
        [100, 20],
      ],
    },
  ],
  standing: 'checked once',
};
let files = 0;
const write = (content: unknown) => {
  const path = join(folder, `scheme-${files++}.json`);
  writeFileSync(path, typeof content === 'string' ? content : JSON.stringify(content));
  return path;
};
const load = (changes: object) => schemes.load(write({ ...own, ...changes }));

describe('a scheme of one’s own', () => {
  it('is asked, listed, sampled, explained and drawn like any other', () => {
    const scheme = schemes.load(write(own));
    expect(schemes.list().schemes.map(({ key }) => key)).toContain('my-zr-ti');
    const suite = suiteFrom(
      [
        { ...rock({}), Zr: 90, Ti: 5000 },
        { ...rock({}), Zr: 150, Ti: 9000 },
      ],
      { sigma: { Zr: 10 } },
    );
    const verdicts = classify(suite, ['my-zr-ti', 'tas']);
    const { symbols, probability, distance } = verdictOf(verdicts, 'my-zr-ti');
    expect(symbols).toEqual(['N', 'S']);
    expect(distance[0]).toBeCloseTo(Math.log10(100 / 90), 12);
    expect(probability!.values[0][0]).toBeGreaterThan(0.7);
    const sampled = verdictOf(classify(suite, scheme, { probability: 'sampled', draws: 500 }), 'my-zr-ti').probability!;
    expect(Math.abs(sampled.values[0][0] - probability!.values[0][0])).toBeLessThan(0.1);
    expect(explain(verdicts, 0).steps.some(({ sources }) => sources.includes('our own field report'))).toBe(true);
    expect(JSON.stringify(diagrams.scheme(suite, 'my-zr-ti').spec)).toContain('northern');
  });

  it('is refused with one clear message when something is wrong with it', () => {
    expect(() => schemes.load(join(folder, 'none.json'))).toThrow(/none\.json/);
    expect(() => schemes.load('')).toThrow(/takes the path/);
    expect(() => schemes.load(write('{ "key": '))).toThrow(/not valid JSON/);
    expect(() => load({ kind: 'polygon' })).toThrow(/kind/);
    expect(() => load({ surprise: 1 })).toThrow(/surprise/);
    expect(() => load({ key: 'tas' })).toThrow(/taken by a built-in scheme/);
    expect(() => load({ axes: [{ expression: 'Zr +', title: 'Zr' }, own.axes[1]] })).toThrow(/my-zr-ti.*Zr \+/s);
    expect(() => load({ plane: 'ternary' })).toThrow(/three axes/);
    expect(() => load({ frame: undefined })).toThrow(/needs a frame/);
    expect(() => load({ fields: [own.fields[0], { ...own.fields[1], symbol: 'N' }] })).toThrow(/"N" is used twice/);
    expect(() =>
      load({
        fields: [
          own.fields[0],
          {
            ...own.fields[1],
            vertices: [
              [50, 0],
              [1000, 0],
              [1000, 20],
              [50, 20],
            ],
          },
        ],
      }),
    ).toThrow(/"N" and "S" overlap/);
    expect(() =>
      load({
        fields: [
          {
            ...own.fields[0],
            vertices: [
              [10, 0],
              [100, 0],
              [10, 0],
            ],
          },
        ],
      }),
    ).toThrow(/no area/);
    expect(() =>
      load({
        fields: [
          {
            ...own.fields[0],
            vertices: [
              [1, 0],
              [100, 0],
              [100, 20],
            ],
          },
        ],
      }),
    ).toThrow(/outside the frame/);
    expect(() =>
      load({
        kind: 'lines',
        lines: [
          {
            name: 'one',
            points: [
              [10, 5],
              [1000, 8],
            ],
          },
        ],
        fields: [{ symbol: 'a', name: 'a' }],
      }),
    ).toThrow(/one field more than lines/);
    expect(() =>
      load({
        kind: 'lines',
        axes: [{ ...own.axes[0], scale: 'linear' }, own.axes[1]],
        lines: [
          {
            name: 'one',
            points: [
              [10, 5],
              [1000, 8],
            ],
          },
          {
            name: 'two',
            points: [
              [10, 3],
              [1000, 9],
            ],
          },
        ],
        fields: ['a', 'b', 'c'].map((symbol) => ({ symbol, name: symbol })),
      }),
    ).toThrow(/lies below the one before/);
    expect(() =>
      load({
        kind: 'lines',
        lines: [
          {
            name: 'one',
            points: [
              [10, 5],
              [1000, 8],
            ],
          },
        ],
        fields: ['a', 'b'].map((symbol) => ({ symbol, name: symbol })),
      }),
    ).toThrow(/log/);
    expect(() => load({ kind: 'thresholds', bounds: [2, 1], fields: ['a', 'b', 'c'].map((symbol) => ({ symbol, name: symbol })) })).toThrow(/ascend/);
    expect(() =>
      load({
        kind: 'criteria',
        criteria: [{ expression: 'Sr', is: 'between', value: 3 }],
        fields: ['a', 'b'].map((symbol) => ({ symbol, name: symbol })),
      }),
    ).toThrow(/takes \[low, high\]/);
  });
});
