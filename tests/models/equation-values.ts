import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import Papa from 'papaparse';

/** Rows of tests/data/models/equation-values.csv of one equation, with their inputs read as numbers where they are numbers. */
export function equationValues(equation: string): { inputs: Record<string, number>; output: string; value: number }[] {
  const text = readFileSync(join(__dirname, '../data/models/equation-values.csv'), 'utf8');
  const rows = Papa.parse<Record<string, string>>(text, { header: true, skipEmptyLines: true }).data.filter((row) => row.equation === equation);
  if (rows.length === 0) throw new Error(`No equation values for "${equation}"`);
  return rows.map((row) => ({
    inputs: Object.fromEntries(
      row.inputs
        .split(';')
        .map((pair) => pair.split('='))
        .map(([name, value]) => [name.trim(), parseFloat(value)]),
    ),
    output: row.output,
    value: Number(row.value),
  }));
}
