import { check } from '@placemarkio/check-geojson';
import { mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Papa from 'papaparse';
import { readSheet } from 'read-excel-file/node';
import { describe, expect, it, vi } from 'vitest';
import {
  column,
  fertilityGeoJson,
  saveFertilityCsv,
  saveFertilityGeoJson,
  saveFertilityWorkbook,
  screenFertility,
  standingCautions,
} from 'wedgework';
import { intrusions, suiteLike } from './made-suites';

const folder = mkdtempSync(join(tmpdir(), 'fertility-'));
const { suite } = intrusions();
const screen = screenFertility(suite, { group: 'intrusion' });
const hostile = ['=HYPERLINK("x")', '+1', '-1', '@sum', '\t=1', 'plain, with "quotes"'];

const placed = (latitude: readonly number[], longitude: readonly number[]) => {
  const base = suiteLike(latitude.map(() => ({})));
  return screenFertility(
    base.with([column({ symbol: 'latitude', values: latitude, unit: '°' }), column({ symbol: 'longitude', values: longitude, unit: '°' })]),
    { group: 'unit' },
  );
};

describe('GeoJSON', () => {
  for (const rows of ['groups', 'samples'] as const) {
    it(`is valid under RFC 7946, one feature for each of the ${rows}, with the evidence as attributes`, () => {
      const path = join(folder, `${rows}.geojson`);
      expect(saveFertilityGeoJson(screen, path, { rows })).toEqual({ path, rows: rows === 'groups' ? 20 : 3000 });
      // The checker throws on anything that RFC 7946 does not allow.
      const collection = check(readFileSync(path, 'utf8')) as unknown as ReturnType<typeof fertilityGeoJson>;
      expect(collection.features).toHaveLength(rows === 'groups' ? 20 : 3000);
      expect(collection.cautions).toEqual(expect.arrayContaining([...standingCautions]));
      const [first] = collection.features;
      expect(first.geometry!.type).toBe(rows === 'groups' ? 'MultiPoint' : 'Point');
      expect(Object.values(first.properties).every((value) => value === null || typeof value !== 'object')).toBe(true);
      expect(first.properties.caution).toContain('competent');
      // Longitude first: the arc lies near 46–43° S, 131–128° W.
      const [west, south, east, north] = collection.bbox!;
      expect(west).toBeGreaterThan(-131.1);
      expect(east).toBeLessThan(-127.9);
      expect(south).toBeGreaterThan(-46.1);
      expect(north).toBeLessThan(-42.9);
    });
  }

  it('carries verdict, rank and evidence of each group', () => {
    const of = fertilityGeoJson(screen).features.find(({ properties }) => properties.intrusion === 'Ambrel stock')!;
    expect(of.properties).toMatchObject({
      verdict: 'supported',
      'sr-y-2014 met': expect.any(Number),
      'check on labelled districts': screen.calibration.statement,
    });
    expect(of.geometry).toMatchObject({ type: 'MultiPoint' });
    expect((of.geometry as { coordinates: readonly unknown[] }).coordinates).toHaveLength(180);
  });

  it('has no geometry where there are no coordinates, or none on earth', () => {
    const found = fertilityGeoJson(placed([NaN, 95, -44], [-129, -129, 230]), { rows: 'samples' });
    check(JSON.stringify(found));
    expect(found.features.map(({ geometry }) => geometry?.coordinates ?? null)).toEqual([null, null, [-130, -44]]);
    expect(fertilityGeoJson(screenFertility(suiteLike([{}]), { group: 'unit' })).features[0].geometry).toBeNull();
  });

  it('bounds groups across the 180° meridian as RFC 7946 (5.2) has it', () => {
    const crossing = placed([-17, -18], [179, -179]);
    expect(fertilityGeoJson(crossing).bbox).toEqual([179, -18, -179, -17]);
    expect(Math.abs(crossing.groups[0].longitude)).toBeGreaterThan(179.9);
  });
});

describe('CSV', () => {
  it('holds one row a sample, struck-out verdicts told, cautions in every row', () => {
    const path = join(folder, 'samples.csv');
    saveFertilityCsv(screen, path, { rows: 'samples' });
    const { data, errors } = Papa.parse<Record<string, string>>(readFileSync(path, 'utf8'), { header: true, skipEmptyLines: true });
    expect(errors).toEqual([]);
    expect(data).toHaveLength(3000);
    expect(data.every((row) => row.caution.includes('does not find ore'))).toBe(true);
    const altered = data.find((row) => row.flags.includes('altered (label)') && row.intrusion === 'Ostrel pluton')!;
    expect(altered['sr-y-2014']).toMatch(/^struck out \((met|not met)\) – altered|^not applicable – silica/);
    expect(data.filter((row) => row['sr-y-2014'].startsWith('struck out')).length).toBeGreaterThan(300);
    expect(Number(data[0]['Sr/Y'])).toBeCloseTo(suite.values('Sr')[0] / suite.values('Y')[0], 3);
  });

  it('keeps both columns where a label bears the name of one of ours', () => {
    const path = join(folder, 'by-sample.csv');
    saveFertilityCsv(screenFertility(suiteLike([{}, {}]), { group: 'sample' }), path, { rows: 'samples' });
    expect(readFileSync(path, 'utf8')).toMatch(/^sample,sample \(2\),/);
  });

  it('makes texts inert that a spreadsheet would run, and quotes what needs it', () => {
    const path = join(folder, 'hostile.csv');
    saveFertilityCsv(
      screenFertility(
        suiteLike(
          hostile.map(() => ({})),
          { labels: { sample: hostile, unit: hostile } },
        ),
        { group: 'unit' },
      ),
      path,
      { rows: 'samples' },
    );
    const { data } = Papa.parse<Record<string, string>>(readFileSync(path, 'utf8'), { header: true, skipEmptyLines: true });
    expect(data.map((row) => row.sample)).toEqual(['\'=HYPERLINK("x")', "'+1", "'-1", "'@sum", "'\t=1", 'plain, with "quotes"']);
    expect(data.every((row) => !/^[=+@]/.test(row.unit))).toBe(true);
  });
});

describe('workbook', () => {
  it('has a sheet each for verdicts, evidence, samples, cautions and sources', async () => {
    const path = join(folder, 'screening.xlsx');
    await saveFertilityWorkbook(screen, path);
    const read = (sheet: string) => readSheet(path, sheet);
    const verdicts = await read('Verdicts');
    expect(verdicts).toHaveLength(21);
    expect(verdicts.slice(1).map((row) => row[1])).toEqual(screen.groups.map(({ group }) => group));
    expect(verdicts[1][2]).toBe('supported');
    expect((await read('Cautions')).flat().join(' ')).toContain('competent');
    expect((await read('Sources')).flat().join(' ')).toContain('10.1080/08120099.2013.865676');
    expect((await read('Evidence')).length).toBeGreaterThan(20 * 12);
    expect(await read('Samples')).toHaveLength(3001);
  });

  it('makes texts inert that a spreadsheet would run', async () => {
    const path = join(folder, 'hostile.xlsx');
    await saveFertilityWorkbook(
      screenFertility(
        suiteLike(
          hostile.map(() => ({})),
          { labels: { sample: hostile, unit: hostile } },
        ),
        { group: 'unit' },
      ),
      path,
    );
    const names = (await readSheet(path, 'Verdicts')).slice(1).map((row) => String(row[1]));
    expect(names.every((name) => !/^\s*[=+\-@]/.test(name))).toBe(true);
  });
});

describe('bytes', () => {
  it('are the same whenever the same screening is written', async () => {
    const small = screenFertility(suiteLike([{}, { Sr: 900, Y: 9 }]), { group: 'unit' });
    const paths = ['first.xlsx', 'second.xlsx'].map((name) => join(folder, name));
    await saveFertilityWorkbook(small, paths[0]);
    vi.useFakeTimers({ now: Date.UTC(2031, 4, 17, 9, 30), toFake: ['Date'] });
    await saveFertilityWorkbook(small, paths[1]);
    vi.useRealTimers();
    expect(readFileSync(paths[0]).equals(readFileSync(paths[1]))).toBe(true);
    expect(await readSheet(paths[1], 'Verdicts')).toHaveLength(2);
  });
});

describe('saving', () => {
  it('writes whole files or none, and leaves no part behind', async () => {
    const path = join(folder, 'missing', 'x.csv');
    saveFertilityCsv(screen, path);
    expect(readdirSync(join(folder, 'missing'))).toEqual(['x.csv', 'x.csv.lineage.json']);
    writeFileSync(join(folder, 'a-file'), '');
    expect(() => saveFertilityCsv(screen, join(folder, 'a-file', 'x.csv'))).toThrow();
    await expect(saveFertilityWorkbook(screen, join(folder, 'a-file', 'x.xlsx'))).rejects.toThrow();
    expect(readdirSync(folder).filter((name) => name.includes('.part'))).toEqual([]);
  });

  it('refuses another ending or other rows', async () => {
    expect(() => saveFertilityCsv(screen, 'x.txt')).toThrow('ends in .csv');
    expect(() => saveFertilityGeoJson(screen, 'x.json')).toThrow('ends in .geojson');
    expect(() => fertilityGeoJson(screen, { rows: 'all' as never })).toThrow('"groups" or "samples"');
    await expect(saveFertilityWorkbook(screen, 'x.xls')).rejects.toThrow('ends in .xlsx');
  });
});
