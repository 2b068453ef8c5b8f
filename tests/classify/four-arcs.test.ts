import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { arcMagmaKinds, consensus, suiteTrend } from 'wedgework';
import { fourArcs } from './suites';

const count = (texts: readonly string[]): Record<string, number> => {
  const counts: Record<string, number> = {};
  for (const text of texts) counts[text === '' ? 'none' : text] = (counts[text === '' ? 'none' : text] ?? 0) + 1;
  return Object.fromEntries(Object.entries(counts).sort(([a], [b]) => (a < b ? -1 : 1)));
};

// Counts by field of four whole arcs, reviewed by eye; a change here must be explained by a change of rule or data.
const snapshot = join(__dirname, '../data/classify/four-arcs-counts.json');
const reviewed: Record<string, Record<string, Record<string, number>>> = existsSync(snapshot) ? JSON.parse(readFileSync(snapshot, 'utf8')) : {};

describe('four arcs, whole', () => {
  for (const [arc, suite] of fourArcs()) {
    it(`${arc}: every row has a verdict or a reason; counts as reviewed`, () => {
      const made = consensus(suite);
      const counts: Record<string, Record<string, number>> = {
        names: count(made.names.names),
        reading: count(made.reading),
        immobile: count(made.affinity.affinity),
      };
      const silent: string[] = [];
      for (const [key, { symbols, field, remarks }] of made.verdicts.schemes) {
        counts[key] = count(symbols);
        for (let i = 0; i < suite.size; i++) if (field[i] < 0 && remarks[i] === '') silent.push(`${key} row ${i}`);
      }
      made.names.names.forEach((name, i) => name === '' && made.names.remarks[i] === '' && silent.push(`name of row ${i}`));
      expect(silent).toEqual([]);
      counts.kinds = count(arcMagmaKinds(suite).kinds);
      for (const each of Object.values(counts)) expect(Object.values(each).reduce((a, b) => a + b, 0)).toBe(suite.size);
      expect(counts).toEqual(reviewed[arc]);
      expect(suiteTrend(suite).groups[0].count).toBeGreaterThan(100);
    });
  }
});
