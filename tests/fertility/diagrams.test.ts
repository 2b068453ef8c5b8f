import { describe, expect, it } from 'vitest';
import { diagrams, labelledDistricts, screenFertility, sources, suiteOf } from 'wedgework';
import { intrusions, suiteLike } from './made-suites';

const { suite } = intrusions();
const screen = screenFertility(suite, { group: 'intrusion' });

/** Every row of data that a specification draws. */
function rowsOf(spec: unknown): Record<string, number | string>[] {
  if (Array.isArray(spec)) return spec.flatMap(rowsOf);
  if (typeof spec !== 'object' || spec === null) return [];
  const { values } = spec as { values?: unknown };
  return Array.isArray(values) ? (values as Record<string, number | string>[]) : Object.values(spec).flatMap(rowsOf);
}

const vertices = (spec: unknown) =>
  rowsOf(spec)
    .filter((row) => 'i' in row)
    .map(({ x, y }) => [x, y]);

describe('diagrams of the screening criteria', () => {
  it('draws the published limits as numbers of the tables', () => {
    const line = vertices(diagrams.vanadiumScandium(suite).spec);
    // Loucks 2014 (from memory): 32.5 − 0.385·57 = 10.555
    expect(line).toContainEqual([57, 10.555]);
    const box = vertices(diagrams.strontiumYttrium(suite).spec);
    expect(box).toContainEqual([18, 40]);
    for (const limit of [20, 35]) expect(box).toContainEqual([0, limit]);
    expect(vertices(diagrams.lanthanumYtterbium(suite).spec)).toContainEqual([8.5, 10]);
    const silica = vertices(diagrams.strontiumYttriumSilica(suite).spec);
    expect(silica).toContainEqual([57, 35]);
    expect(silica).toContainEqual([56, 20]);
  });

  it.each(['strontiumYttrium', 'lanthanumYtterbium', 'vanadiumScandium', 'strontiumYttriumSilica'] as const)(
    '%s names its sources and counts every sample',
    async (name) => {
      const diagram = diagrams[name](screen);
      expect(diagram.counts.plotted + diagram.counts.notPlotted).toBe(3000);
      const caption = (diagram.spec as { title: { text: readonly string[] } }).title.text.join(' ');
      expect(caption).toContain('it does not find ore');
      expect(caption).toMatch(/Loucks 2014|Martin 1986/);
      expect(sources(diagram).keys.length).toBeGreaterThan(3);
      expect(await diagrams.specWarnings(diagram.spec)).toEqual([]);
      expect((await diagram.png()).length).toBeGreaterThan(10_000);
    },
  );

  it('draws guarded samples open, and colours by verdict', () => {
    const rows = rowsOf(diagrams.strontiumYttrium(screen).spec).filter((row) => 'g' in row);
    expect(new Set(rows.map(({ g }) => g))).toEqual(new Set(['supported', 'undecided', 'not supported']));
    const guarded = Array.from({ length: suite.size }, (_, i) =>
      screen.guards.some(({ guard, flags }) => guard.effect !== 'caution' && flags[i] === 1),
    ).filter(Boolean).length;
    expect(rows.filter((row) => 'o' in row)).toHaveLength(guarded);
  });

  it('takes a suite of its own with groups', () => {
    expect(diagrams.strontiumYttriumSilica(labelledDistricts(), { group: 'district' }).counts.plotted).toBe(30);
  });

  it('maps the groups by verdict', () => {
    const map = diagrams.screeningMap(screen);
    expect(map.counts.plotted).toBe(20);
    expect(rowsOf(map.spec).filter(({ t0 }) => t0 === 'Keshal stock')[0]).toMatchObject({ g: 'undecided' });
  });

  it('refuses what it cannot draw', () => {
    expect(() => diagrams.screeningMap(screenFertility(suiteLike([{}]), { group: 'unit' }))).toThrow('no columns latitude and longitude');
    expect(() => diagrams.screeningMap({} as never)).toThrow('what screenFertility returned');
    expect(() => diagrams.strontiumYttrium(suiteOf({ columns: [] }))).toThrow('which this suite does not hold');
    expect(() => diagrams.strontiumYttrium(undefined as never)).toThrow('must be a Suite');
    expect(() => diagrams.vanadiumScandium(suite, { group: 'nowhere' })).toThrow('no label "nowhere"');
  });
});
