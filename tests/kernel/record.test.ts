import { execFileSync } from 'node:child_process';
import { readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { built } from './engine';
import { madeRun, sheet } from './made-run';

const { runNotebook, verifyRun, lineage } = createRequire(__filename)(join(built, 'index.js')) as typeof import('../../kernel-lib');
const command = join(built, 'kernel/cli.js');
const folders: string[] = [];
const made = () => {
  const run = madeRun();
  folders.push(run.folder);
  return run;
};
afterAll(() => folders.forEach((folder) => rmSync(folder, { recursive: true, force: true })));
const recordOf = (out: string) => out.replace(/\.ipynb$/, '.record.json');

describe('a run record', () => {
  const first = made();
  beforeAll(async () => {
    const run = await runNotebook(first.notebook, { out: first.out });
    expect(run.failures).toEqual([]);
  });

  it('names inputs, tables, versions and outputs, and no absolute path, user or time', () => {
    const text = readFileSync(recordOf(first.out), 'utf8');
    const record = JSON.parse(text) as { inputs: { file: string }[]; tables: { table: string }[]; cells: { id: string; outputs: unknown[] }[] };
    expect(record.inputs.map(({ file }) => file)).toEqual(['../lavas.csv']);
    expect(record.tables.map(({ table }) => table)).toEqual(expect.arrayContaining(['atomic-weights.csv', 'schemes/tas.json', 'partition-coefficients.csv']));
    expect(record.cells.map(({ id }) => id)).toEqual(['parameters', 'read', 'dry', 'names', 'ratios', 'path', 'figure', 'summary']);
    expect(text).not.toContain(first.folder);
    expect(text).not.toMatch(/\d{4}-\d\d-\d\dT/);
  });

  it('gives the same bytes in another folder, time zone and language', () => {
    const second = made();
    const environment = { ...process.env, TZ: 'Pacific/Chatham', LANG: 'de_DE.UTF-8', LC_ALL: 'de_DE.UTF-8' };
    execFileSync(process.execPath, [command, 'run', second.notebook, '--out', second.out, '--quiet'], { cwd: second.folder, env: environment });
    expect(readFileSync(second.out, 'utf8')).toBe(readFileSync(first.out, 'utf8'));
    expect(readFileSync(recordOf(second.out), 'utf8')).toBe(readFileSync(recordOf(first.out), 'utf8'));
  });

  it('verifies as identical, and leaves everything as it was', async () => {
    const before = readdirSync(first.folder, { recursive: true }).sort();
    const result = await verifyRun(first.out);
    expect(result).toMatchObject({ verdict: 'identical', changes: [], differences: [], because: '' });
    expect(result.values).toBeGreaterThan(300);
    expect(readdirSync(first.folder, { recursive: true }).sort()).toEqual(before);
  });

  it('rests on exactly the sources of what was used', async () => {
    const { facts } = await runNotebook(first.notebook);
    // TAS: Le Bas et al. 1986 and 1992, Le Maitre et al. 2002; FeO*/MgO: Miyashiro 1974; Rayleigh's law for crystallisation: Neumann et al.
    // 1954, Gast 1968; the coefficients of Rb and La in olivine and plagioclase: the tables of the works that hold them. Nothing else.
    const keys = new Set(facts!.lineage.flatMap(({ sources }) => sources));
    expect([...keys].sort()).toEqual(
      ['arth_1976', 'gast_1968', 'le_bas_1986', 'le_bas_1992', 'le_maitre_2002', 'miyashiro_1974', 'neumann_1954', 'rollinson_1993', 'winter_2001'].sort(),
    );
    // No rock was normalised, and no other scheme asked: neither reservoirs nor other schemes are among the tables.
    const tables = new Set(facts!.lineage.flatMap((each) => each.tables));
    expect([...tables].sort()).toEqual(['analyte-spellings.json', 'atomic-weights.csv', 'partition-coefficients.csv', 'plausible-ranges.csv', 'schemes/iron-enrichment.json', 'schemes/tas.json']);
    expect(lineage({ lineage: facts!.lineage }).steps.map(({ what }) => what)).toEqual(expect.arrayContaining(['readAssays', 'volatileFree', 'classify', 'ratios', 'crystallise', 'diagrams.tas']));
  });
});

describe('verify names each change', () => {
  const run = made();
  beforeAll(async () => void (await runNotebook(run.notebook, { out: run.out })));
  const restoring = async (path: string, change: (text: string) => string, check: () => Promise<void>) => {
    const text = readFileSync(path, 'utf8');
    expect(change(text)).not.toBe(text);
    writeFileSync(path, change(text));
    try {
      await check();
    } finally {
      writeFileSync(path, text);
    }
  };

  it('one cell of the input: its row, its column, and the values that follow', () =>
    restoring(run.sheet, (text) => text.replace('53.1,1.12', '53.6,1.12'), async () => {
      const { verdict, changes, differences } = await verifyRun(run.out);
      expect(verdict).toBe('different');
      expect(changes).toEqual([{ what: 'input', text: expect.stringMatching(/lavas\.csv, sheet .*: row 3, column SiO2 \(wt%\)$/) as string }]);
      const read = differences.find(({ cell, place }) => cell === 2 && place.includes('K-2') && place.includes('SiO2'));
      expect(read).toMatchObject({ before: '53.1', after: '53.6' });
      expect(read!.relative).toBeCloseTo(0.5 / 53.1, 6);
      // A figure's data count as well as a table's.
      expect(differences.some(({ kind, place }) => kind === 'figure' && place.includes('K-2'))).toBe(true);
    }));

  it('one option in the notebook: its cell and line', () =>
    restoring(run.notebook, (text) => text.replace("ww.volatileFree(suite)", "ww.volatileFree(suite, { iron: 'total-as-Fe2O3' })"), async () => {
      const { verdict, changes } = await verifyRun(run.out);
      expect(verdict).toBe('different');
      expect(changes).toEqual([{ what: 'notebook', text: expect.stringContaining("code cell 3 (dry), line 1: \"const dry = ww.volatileFree(suite);\" is now \"const dry = ww.volatileFree(suite, { iron: 'total-as-Fe2O3' });\"") as string }]);
    }));

  it('one value of a reference table: its file and line', () =>
    // The record is made to say that line 5 of the table was another one: the same as if the table had changed since.
    restoring(recordOf(run.out), (text) => {
      const record = JSON.parse(text) as { tables: { table: string; sha256: string; lines: string }[] };
      const table = record.tables.find(({ table: name }) => name === 'atomic-weights.csv')!;
      table.sha256 = '0'.repeat(64);
      table.lines = `${table.lines.slice(0, 24)}ffffff${table.lines.slice(30)}`;
      return JSON.stringify(record);
    }, async () => {
      const { verdict, changes } = await verifyRun(run.out);
      expect(verdict).toBe('identical');
      expect(changes).toEqual([{ what: 'table', text: 'reference-tables/atomic-weights.csv, line 5' }]);
    }));

  it('one package version', () =>
    restoring(recordOf(run.out), (text) => text.replace(/"vega": "[^"]+"/, '"vega": "5.0.0"'), async () => {
      const { verdict, changes } = await verifyRun(run.out);
      expect(verdict).toBe('identical');
      expect(changes).toEqual([{ what: 'version', text: expect.stringMatching(/^vega 5\.\d+\.\d+, where it was 5\.0\.0$/) as string }]);
    }));

  it('another platform: numbers are then compared to a tolerance', () =>
    restoring(recordOf(run.out), (text) => text.replace(/"platform": "[^"]+"/, '"platform": "plan9 mips"'), async () => {
      const { verdict, changes } = await verifyRun(run.out);
      expect(verdict).toBe('identical');
      expect(changes.map(({ what }) => what)).toEqual(['platform']);
    }));

  it('a missing input, an edited result, a damaged record: a verdict or one clear error, no stack trace', async () => {
    rmSync(run.sheet);
    expect(await verifyRun(run.out)).toMatchObject({ verdict: 'not comparable', because: expect.stringContaining('../lavas.csv is missing') as string });
    writeFileSync(run.sheet, sheet);
    await restoring(run.out, (text) => text.replace('"53.1', '"99.9').replace('>53.1<', '>99.9<'), async () => {
      expect(await verifyRun(run.out)).toMatchObject({ verdict: 'not comparable', because: expect.stringContaining('changed by hand') as string });
    });
    await restoring(recordOf(run.out), (text) => text.slice(0, 500), async () => {
      await expect(verifyRun(run.out)).rejects.toThrow('the run record is damaged');
    });
    await restoring(recordOf(run.out), () => '{"format": "something else"}', async () => {
      await expect(verifyRun(run.out)).rejects.toThrow('not a run record that this version reads');
    });
    await expect(verifyRun(join(run.folder, 'none.ipynb'))).rejects.toThrow('There is no run record');
  });

  it('tells a shell by its exit status', () => {
    const status = (path: string) => {
      try {
        execFileSync(process.execPath, [command, 'verify', path, '--quiet'], { stdio: 'pipe' });
        return 0;
      } catch (error) {
        return (error as { status: number }).status;
      }
    };
    expect(status(run.out)).toBe(0);
    expect(status(join(run.folder, 'none.ipynb'))).toBe(2);
  });
});
