import { z } from 'zod';
import { field, once, readCsvTable, type Standing } from '../tables';

/** A slab, source or process tracer of reference-tables/tracers.csv. */
export interface Tracer {
  /** The expression, as written in the trade. */
  readonly tracer: string;
  /** Whether it is computed when no ratios are named. */
  readonly usual: boolean;
  /** What it is read for. */
  readonly traces: string;
  /** What arcs show, in words: for display, never a threshold. */
  readonly inArcs: string;
  readonly source: string;
  readonly standing: Standing;
}

const rowSchema = z.strictObject({
  tracer: field.text,
  usual: z.enum(['yes', 'no']),
  traces: field.text,
  in_arcs: field.optionalText,
  source: field.text,
  standing: field.standing,
});

const all = once((): readonly Tracer[] =>
  readCsvTable('tracers.csv', rowSchema).map(({ usual, in_arcs: inArcs, ...row }) => ({ ...row, usual: usual === 'yes', inArcs })),
);

/** Every tracer of the table, with what it is read for. */
export function tracers(): readonly Tracer[] {
  return all();
}

/** The ratios computed when none are named. */
export const usualRatios: () => readonly string[] = once(() =>
  all()
    .filter(({ usual }) => usual)
    .map(({ tracer }) => tracer),
);
