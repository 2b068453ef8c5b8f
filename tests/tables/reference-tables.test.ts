import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Papa from 'papaparse';
import { afterAll, describe, expect, it } from 'vitest';
import { z } from 'zod';
import {
  bibliography, elementOrder, elementOrders, findSource, formatSource, publishedConstant, referenceFolder, reservoir, reservoirs, shortSource, standings,
} from 'wedgework';
import { field, readCsvTable, readJsonTable } from '../../kernel-lib/tables';

/** Every file below reference-tables/, by its path inside. */
function filesBelow(folder: string, prefix = ''): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) =>
    entry.isDirectory() ? filesBelow(join(folder, entry.name), `${prefix}${entry.name}/`) : [`${prefix}${entry.name}`],
  );
}

const files = filesBelow(referenceFolder());

describe('every CSV table', () => {
  const tables = files.filter((file) => file.endsWith('.csv'));
  it.each(tables)('%s: names a known source and standing on every row', (file) => {
    const { data, meta } = Papa.parse<Record<string, string>>(readFileSync(join(referenceFolder(), file), 'utf8'), { header: true, skipEmptyLines: true });
    expect(data.length).toBeGreaterThan(0);
    expect(meta.fields).toContain('standing');
    for (const [i, row] of data.entries()) {
      const where = `${file}, line ${i + 2}`;
      expect(standings as readonly string[], where).toContain(row.standing);
      if (row.source !== '' && row.source !== undefined) expect(bibliography().has(row.source), `${where}: source "${row.source}"`).toBe(true);
    }
  });
});

describe('the bibliography', () => {
  it('holds works with a title and an author, and formats each', () => {
    for (const [key, source] of bibliography()) {
      expect(source.title.length, key).toBeGreaterThan(3);
      expect(formatSource(key), key).toContain(source.title);
      expect(shortSource(key).length, key).toBeGreaterThan(3);
    }
  });

  it('says what to do about an unknown key', () => {
    expect(() => findSource('nobody_1900')).toThrow('reference-tables/bibliography/');
  });

  it('formats a reference', () => {
    expect(shortSource('sun_mcdonough_1989')).toBe('Sun & McDonough 1989');
    expect(shortSource('gale_2013')).toBe('Gale et al. 2013');
    expect(formatSource('workman_hart_2005')).toContain('231: 53-72');
  });
});

describe('reservoirs', () => {
  it('hands out a value with its unit, source and standing', () => {
    // Sun & McDonough 1989, table 1: La of C1 chondrite 0.237 ppm.
    expect(reservoir('chondrite-c1-1989').values.get('La')).toMatchObject({ value: 0.237, unit: 'ppm', source: 'sun_mcdonough_1989' });
    expect(reservoirs().size).toBeGreaterThan(20);
  });

  it('lists the keys there are', () => {
    expect(() => reservoir('moon')).toThrow('chondrite-c1-1989');
    expect(() => elementOrder('alphabet')).toThrow('rare-earths');
    expect(() => publishedConstant('c')).toThrow('lambda-147Sm');
  });

  it('keeps orders without gaps or repeats', () => {
    for (const { key, elements } of elementOrders().values()) {
      expect(elements.every((element) => typeof element === 'string'), key).toBe(true);
      expect(new Set(elements).size, key).toBe(elements.length);
    }
  });
});

describe('a faulty table', () => {
  const folder = mkdtempSync(join(tmpdir(), 'tables-'));
  afterAll(() => rmSync(folder, { recursive: true }));
  const written = (name: string, text: string) => {
    const path = join(folder, name);
    writeFileSync(path, text);
    return path;
  };
  const row = z.strictObject({ key: field.text, value: field.number, standing: field.standing });

  it.each([
    ['key,value,standing\na,1x,verified\n', 'line 2: value: must be a number'],
    ['key,value,standing\na,1,verified\nb,2,certain\n', 'line 3: standing'],
    ['key,value,standing,extra\na,1,verified,x\n', 'line 2'],
    ['key,value,standing\na,1\n', 'line 2: 2 cells under 3 column heads'],
    ['', 'the table is empty'],
  ])('is refused with its file and line: %j', (text, message) => {
    const path = written('bad.csv', text);
    expect(() => readCsvTable(path, row, { absolute: true })).toThrow(message);
    expect(() => readCsvTable(path, row, { absolute: true })).toThrow('bad.csv');
  });

  it('is refused when it is not JSON, or not the JSON it should be', () => {
    const schema = z.strictObject({ key: z.string() });
    expect(() => readJsonTable(written('bad.json', '{'), schema, { absolute: true })).toThrow('not valid JSON');
    expect(() => readJsonTable(written('odd.json', '{"key": "a", "sauce": 1}'), schema, { absolute: true })).toThrow('sauce');
  });
});
