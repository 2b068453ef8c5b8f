import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Papa from 'papaparse';

export const dataFile = (name: string): string => join(__dirname, '..', 'data', 'margin', name);

/** Writes a small CSV for one test and gives its path. */
export function csv(name: string, text: string): string {
  const path = join(mkdtempSync(join(tmpdir(), 'margin-')), name);
  writeFileSync(path, text);
  return path;
}

/** Rows of the published table of slabs below volcanoes (Syracuse & Abers 2006, table S2a); NaN where the table has no number. */
export interface PublishedVolcano {
  readonly name: string;
  readonly arc: string;
  readonly front: boolean;
  readonly longitude: number;
  readonly latitude: number;
  readonly depth: number;
  readonly trenchDistance: number;
  readonly strike: number;
  readonly dip: number;
  readonly azimuth: number;
  readonly total: number;
  readonly normal: number;
  readonly age: number;
  readonly descent: number;
  readonly phi: number;
}

export function publishedVolcanoes(): PublishedVolcano[] {
  const { data } = Papa.parse<Record<string, string>>(readFileSync(dataFile('slab-below-volcanoes.csv'), 'utf8'), {
    header: true,
    skipEmptyLines: true,
  });
  const number = (text: string) => (text === '' ? NaN : Number(text));
  return data.map((row) => ({
    name: row['name'],
    arc: row['arc'],
    front: row['front'] === 'y',
    longitude: number(row['Lon_deg']),
    latitude: number(row['Lat_deg']),
    depth: number(row['H_km']),
    trenchDistance: number(row['trench_dist_km']),
    strike: number(row['strike_deg']),
    dip: number(row['dip_deg']),
    azimuth: number(row['az_conv_deg']),
    total: number(row['Vtot_km_Ma']),
    normal: number(row['Vc_km_Ma']),
    age: number(row['age_Ma']),
    descent: number(row['descent_km_Ma']),
    phi: number(row['Phi_over_100_km']),
  }));
}

export const median = (values: readonly number[]): number => {
  const sorted = values.filter(Number.isFinite).sort((a, b) => a - b);
  return sorted.length % 2 === 1 ? sorted[(sorted.length - 1) / 2] : (sorted[sorted.length / 2 - 1] + sorted[sorted.length / 2]) / 2;
};
