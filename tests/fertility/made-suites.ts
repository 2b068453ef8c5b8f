import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';
import { cellState, column, suiteOf, type Suite } from 'wedgework';

/** One andesite that meets no criterion and no guard: the ground on which a test changes what it asks about. */
export const ordinary: Readonly<Record<string, number>> = {
  SiO2: 60,
  TiO2: 0.7,
  Al2O3: 17,
  FeOT: 6,
  MnO: 0.12,
  MgO: 3,
  CaO: 6,
  Na2O: 3.7,
  K2O: 1.5,
  P2O5: 0.2,
  LOI: 1,
  Total: 100,
  Sc: 15,
  V: 120,
  Cr: 40,
  Ni: 25,
  Cu: 40,
  Sr: 400,
  Y: 20,
  La: 12,
  Sm: 3,
  Eu: 0.95,
  Gd: 3.1,
  Dy: 3,
  Yb: 2,
};

/**
 * A suite of samples that differ from `ordinary` as each entry says; a text `<5` is below detection, `>5` above range, NaN missing. The total
 * stays 100 unless a change says otherwise.
 */
export function suiteLike(
  changes: readonly Readonly<Record<string, number | string>>[],
  options: { sigma?: Readonly<Record<string, number>>; labels?: Readonly<Record<string, readonly string[]>> } = {},
): Suite {
  const symbols = [...new Set([...Object.keys(ordinary), ...changes.flatMap(Object.keys)])];
  const columns = symbols.map((symbol) => {
    const cells = changes.map((change) => change[symbol] ?? ordinary[symbol] ?? NaN);
    const limited = cells.some((cell) => typeof cell === 'string');
    return column({
      symbol,
      values: cells.map((cell) => (typeof cell === 'string' ? NaN : cell)),
      states: Uint8Array.from(cells, (cell) =>
        typeof cell === 'string'
          ? cell.startsWith('<')
            ? cellState.belowDetection
            : cellState.aboveRange
          : Number.isNaN(cell)
            ? cellState.missing
            : cellState.measured,
      ),
      ...(limited ? { limits: Float64Array.from(cells, (cell) => (typeof cell === 'string' ? Number(cell.slice(1)) : NaN)) } : {}),
      ...(options.sigma?.[symbol] === undefined ? {} : { sigma: cells.map(() => options.sigma![symbol]) }),
    });
  });
  return suiteOf({ columns, labels: { unit: changes.map(() => 'A'), ...options.labels } });
}

/** The invented sheet of the notebook, read without the import machinery. */
export function intrusions(): { suite: Suite; truth: readonly { name: string; kind: string; samples: number; lacks: string[]; altered: number }[] } {
  const folder = join(__dirname, '../../notebooks/data');
  const { data, meta } = Papa.parse<Record<string, string>>(readFileSync(join(folder, 'oruvai-intrusions.csv'), 'utf8'), {
    header: true,
    skipEmptyLines: true,
  });
  const texts = ['Sample', 'Intrusion', 'Alteration'];
  const columns = meta
    .fields!.filter((head) => !texts.includes(head))
    .map((head) => {
      const symbol = head.replace(/ \(.*/, '').replace('FeO*', 'FeOT').replace('Latitude', 'latitude').replace('Longitude', 'longitude');
      const cells = data.map((row) => row[head]);
      const below = cells.map((cell) => cell.startsWith('<'));
      return column({
        symbol,
        ...(symbol.endsWith('itude') ? { unit: '°' } : {}),
        values: cells.map((cell, i) => (cell === '' || below[i] ? NaN : Number(cell))),
        states: Uint8Array.from(cells, (cell, i) => (below[i] ? cellState.belowDetection : cell === '' ? cellState.missing : cellState.measured)),
        ...(below.includes(true) ? { limits: Float64Array.from(cells, (cell, i) => (below[i] ? Number(cell.slice(1)) : NaN)) } : {}),
      });
    });
  const label = (head: string) => data.map((row) => row[head]);
  const suite = suiteOf({ columns, labels: { sample: label('Sample'), intrusion: label('Intrusion'), alteration: label('Alteration') } });
  return { suite, truth: JSON.parse(readFileSync(join(folder, 'oruvai-intrusions-truth.json'), 'utf8')).groups };
}
