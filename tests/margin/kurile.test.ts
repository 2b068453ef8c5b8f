import { join } from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import {
  crossArcTrend,
  crustalThickness,
  readAssays,
  readSlabPoints,
  slabBelow,
  slabFromDepths,
  volcanoesAbove,
  volatileFree,
  withKinematics,
  type Suite,
} from 'wedgework';
import { dataFile, median, publishedVolcanoes } from './files';

// Published analyses of the Kurile Arc (GEOROC, Convergent Margins, doi:10.25625/PVFZCE, CC BY-SA 4.0) above its slab (Slab2, Hayes et al. 2018).
let islands: Suite;
beforeAll(async () => {
  const { suite } = await readAssays(join(__dirname, '..', 'data', 'assay', 'kurile-arc.csv'));
  const named = suite.withLabels({ volcano: suite.label('Location').map((text) => text.split(' / ')[2] ?? '') });
  // The old rocks of the Lesser Kuriles, of Hokkaido and of the submarine ridge are not of the present arc.
  const old = /Shikotan|Tanfil|Yurii|Anuch|Shibotsu|Taraku|Hokkaido|Vityaz|Rishiri|Rebun|Yagi|Teuri/;
  const young = [...new Set(named.label('volcano'))].filter((name) => name !== '' && !old.test(name));
  const slab = slabFromDepths(await readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'kur' }));
  islands = slabBelow(slab, volatileFree(named.where({ volcano: young })));
});

describe('the Kurile Arc', () => {
  test('every sample has a slab below, within the data', () => {
    expect(islands.size).toBeGreaterThan(400);
    expect(new Set(islands.label('slabSupport'))).toEqual(new Set(['within data']));
    // The lowest, 48 km, is a sample with a position off the island.
    for (const depth of islands.values('SlabDepth')) expect(depth).toBeGreaterThan(40);
  });

  test('depths below islands that are one volcano agree with the published table to 25 km', () => {
    // Syracuse & Abers 2006, table S2a: Alaid 124, Chirinkotan 132, Ekarma 98, Raikoke 106, Harimkotan 66 km
    const { volcanoes } = volcanoesAbove(islands);
    const published = new Map(publishedVolcanoes().map(({ name, depth }) => [name, depth]));
    const pairs: readonly (readonly [string, string])[] = [
      ['Alaid', 'ALAID'],
      ['Chirinkotan (Shirinkotan)', 'CHIRINKOTAN'],
      ['Ekarma (Aekarma)', 'EKARMA'],
      ['Raikoke', 'RAIKOKE'],
      ['Kharimkotan', 'HARIMKOTAN'],
    ];
    const differences = pairs.map(([island, volcano]) => volcanoes.find(({ group }) => group === island)!.depth - published.get(volcano)!);
    for (const difference of differences) expect(Math.abs(difference)).toBeLessThan(25);
    expect(Math.abs(median(differences))).toBeLessThan(16);
  });

  test('rear-arc islands are told from the front', () => {
    const { volcanoes } = volcanoesAbove(islands);
    const front = (name: string) => volcanoes.find(({ group }) => group === name)!.front;
    expect([front('Alaid'), front('Chirinkotan (Shirinkotan)')]).toEqual([false, false]);
    expect([front('Onekotan'), front('Kharimkotan')]).toEqual([true, true]);
  });

  test('the thermal parameter is that of the published table: some 6100 km in the south, 6300 in the north', () => {
    // Syracuse & Abers 2006, table S2a: 59–65 hundred km along the Kuriles; Slab2 dips 10° less below the volcanoes
    const phi = withKinematics(islands, { motion: { rate: { value: 79.5, unit: 'km/Ma' }, azimuth: -57 }, age: 107 });
    const published = median(
      publishedVolcanoes()
        .filter(({ arc }) => arc.endsWith('Kurile'))
        .map((volcano) => volcano.phi * 100),
    );
    expect(median([...phi.values('ThermalParameter')]) / published).toBeGreaterThan(0.75);
    expect(median([...phi.values('ThermalParameter')]) / published).toBeLessThan(1.05);
  });

  test('with one position an island, no trend of K60 with depth can be shown, and none is claimed', () => {
    const trend = crossArcTrend(islands, 'K60');
    expect(trend.points.length).toBeGreaterThanOrEqual(9);
    expect(trend.verdict).toBe('none');
    expect(trend.slopeInterval[0]).toBeLessThan(0);
    expect(trend.slopeInterval[1]).toBeGreaterThan(0);
    expect(trend.notes.join(' ')).toMatch(/Not used: .*needs 5 samples with SiO2 55–65/);
  });

  test('the filter of the ratios leaves too few samples for a thickness, and says at which step; Ce/Y of basalts gives 20–35 km', () => {
    // Crust of the Kuriles from seismic refraction: some 20–35 km (common practice)
    const { estimates } = crustalThickness(islands);
    const linear = estimates.find(({ calibration }) => calibration === 'arc-sr-y-2015')!;
    expect(linear.counts[0].left).toBe(islands.size);
    expect(linear.note).toMatch(/needs 5 samples after the filter/);
    expect(linear.counts.at(-1)!.left).toBeLessThan(5);
    const basalts = estimates.find(({ calibration }) => calibration === 'basalt-ce-y-2008')!;
    expect(basalts.thickness).toBeGreaterThan(20);
    expect(basalts.thickness).toBeLessThan(35);
  });
});
