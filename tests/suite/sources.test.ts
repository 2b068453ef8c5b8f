import { describe, expect, it } from 'vitest';
import { bibliography, bibtex, column, type MimeBundle, joinLineages, lineage, sources, step, suiteOf, volatileFree, withMagnesiumNumber } from 'wedgework';

const wet = suiteOf({
  columns: Object.entries({ SiO2: 50, TiO2: 1, Al2O3: 16, FeOT: 9, MnO: 0.2, MgO: 8, CaO: 11, Na2O: 2, K2O: 0.5, P2O5: 0.1 }).map(([symbol, value]) => column({ symbol, values: [value] })),
  labels: { sample: ['A'] },
  lineage: [step('readAssays', { file: 'a.csv' }, { says: 'Analyses were read from a.csv.' })],
});

describe('lineage', () => {
  it('lists the steps in order, readably', () => {
    const list = lineage(withMagnesiumNumber(volatileFree(wet)));
    expect(list.steps.map(({ what }) => what)).toEqual(['readAssays', 'volatileFree', 'withMagnesiumNumber']);
    expect(String((list.toMimeBundle() as MimeBundle)['text/plain'])).toContain('iron: total-as-FeO');
  });

  it('refuses something without a lineage', () => {
    expect(() => lineage({} as never)).toThrow('something with a lineage');
    expect(() => sources([])).toThrow('an empty list');
    expect(() => sources(undefined as never)).toThrow('it got undefined');
  });
});

describe('sources', () => {
  it('names exactly the works behind a result, each once', () => {
    expect(sources([volatileFree(wet), volatileFree(wet)]).keys).toEqual(['le_maitre_2002']);
    expect(sources(wet).keys).toEqual([]);
    expect(sources(withMagnesiumNumber(wet)).keys).toEqual([]);
  });

  it('writes a methods paragraph from the steps, each sentence once', () => {
    const { methods } = sources([volatileFree(wet), wet]);
    expect(methods.match(/Analyses were read from a\.csv\./g)).toHaveLength(1);
    expect(methods).toContain('after Le Maitre et al. 2002');
  });

  it('says what was taken from memory, and the version of each table', () => {
    const used = wet.with([], step('x', {}, { tables: ['atomic-weights.csv'], fromMemory: ['La 0.237'] }));
    expect(sources(used).fromMemory).toEqual(['La 0.237']);
    expect(sources(volatileFree(wet)).tables).toEqual([{ table: 'atomic-weights.csv', sha256: expect.stringMatching(/^[0-9a-f]{64}$/) }]);
  });
});

describe('joinLineages', () => {
  it('keeps a shared step once', () => {
    expect(joinLineages(wet.lineage, volatileFree(wet).lineage)).toHaveLength(2);
  });
});

describe('bibtex', () => {
  it('has one entry with its own label for every work of the bibliography, and no bare TeX sign', () => {
    const keys = [...bibliography().keys()];
    const written = bibtex(keys);
    const labels = [...written.matchAll(/^@\w+\{([^,]+),/gm)].map((match) => match[1]);
    expect(labels).toHaveLength(keys.length);
    expect(new Set(labels).size).toBe(keys.length);
    expect(written).not.toMatch(/(?<!\\)[&%#]/);
    expect(written).not.toContain('et al.}');
  });
});
