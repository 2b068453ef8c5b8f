import { findAnalyte } from '../chemistry';
import { showAs, type Showable, type TableCell } from '../display';
import { derivedColumn, step, suiteOf, type Column, type Step, type StepDetail, type Suite, type Traced } from '../suite';
import { shortSource } from '../tables';
import { recordCoefficients, sourcesOf, type UsedCoefficient } from './coefficients';
import { recalledCoefficients, sharesInWords } from './in-words';

/**
 * A forward model: what the liquid becomes, step by step (n steps). `liquid` is a suite like any other, so every diagram and every
 * expression works on it; its first row is where the path starts.
 */
export interface ModelPath extends Traced, Showable {
  /** What happens along the path, e.g. `Rayleigh crystallisation`. */
  readonly process: string;
  /** Where the path stands at each step (n); what it counts is in `meaning`. */
  readonly F: Float64Array;
  /** What F counts: `liquid left`, `melt fraction`, `share of …`. */
  readonly meaning: string;
  /** The liquid at each step (n rows): the modelled analytes, and F as the column `F`. */
  readonly liquid: Suite;
  /** The crystals that form at each step, or the residue of melting (n rows), where the process has one. */
  readonly solid?: Suite;
  /** All crystals formed so far (n rows), where the process keeps or counts them. */
  readonly cumulate?: Suite;
  /** Every mineral–melt coefficient used, with melt type, source and standing. */
  readonly coefficients: readonly UsedCoefficient[];
  /** What a reader must know: analytes left out and why, ranges overstepped. */
  readonly notes: readonly string[];
}

/** @internal The concentrations of one phase along a path, by analyte. */
export type PhaseColumns = ReadonlyMap<string, Float64Array>;

/** @internal What a finished path is made of. */
export interface PathParts {
  readonly who: string;
  readonly process: string;
  readonly F: Float64Array;
  readonly meaning: string;
  readonly liquid: PhaseColumns;
  readonly solid?: PhaseColumns;
  readonly cumulate?: PhaseColumns;
  readonly coefficients: readonly UsedCoefficient[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
  readonly detail: { readonly [name: string]: StepDetail };
  readonly sources?: readonly string[];
  readonly tables?: readonly string[];
  /** Quantities along the path that are not analytes: unit by symbol. */
  readonly quantities?: ReadonlyMap<string, { readonly unit: string; readonly values: Float64Array }>;
  readonly labels?: Readonly<Record<string, readonly string[]>>;
}

/** @internal n + 1 values from start to end, evenly spaced, both ends exact. */
export function evenly(start: number, end: number, steps: number): Float64Array {
  const values = new Float64Array(steps + 1);
  for (let i = 0; i <= steps; i++) values[i] = start + ((end - start) * i) / steps;
  values[steps] = end;
  return values;
}

/** The model in a sentence for a methods section. */
function pathInWords({ process, F, meaning, detail }: PathParts): string {
  const { assemblage } = detail;
  const isShares = typeof assemblage === 'object' && assemblage !== null && Object.values(assemblage).every((share) => typeof share === 'number');
  const of = isShares ? ` of ${sharesInWords(assemblage as Readonly<Record<string, number>>)}` : '';
  return `${process}${of} was modelled from F = ${shortF(F[0])} to ${shortF(F[F.length - 1])} (F: ${meaning}).`;
}

const shortF = (value: number): string => String(Number(value.toFixed(4)));

/** @internal Puts a path together: suites with lineage, and the table it shows itself as. */
export function buildPath(parts: PathParts): ModelPath {
  const { who, process, F, meaning, coefficients, notes } = parts;
  const because = step(
    who,
    { process, ...parts.detail, steps: F.length - 1, coefficients: recordCoefficients(coefficients) },
    {
      sources: [...new Set([...(parts.sources ?? []), ...sourcesOf(coefficients)])],
      tables: [...new Set([...(coefficients.length > 0 ? ['partition-coefficients.csv'] : []), ...(parts.tables ?? [])])],
      fromMemory: recalledCoefficients(coefficients),
      says: pathInWords(parts),
    },
  );
  const lineage = [...parts.lineage, because];
  const samples = Array.from(F, (value) => `F = ${shortF(value)}`);
  const phase = (columns: PhaseColumns, extra: Iterable<Column>): Suite =>
    suiteOf({
      columns: [
        derivedColumn('F', F.slice(), ''),
        ...extra,
        ...[...columns].map(([symbol, values]) => {
          const known = findAnalyte(symbol);
          return derivedColumn(symbol, values, known?.unit ?? '', undefined, known?.kind ?? 'quantity');
        }),
      ],
      labels: { sample: samples, process: samples.map(() => process), ...parts.labels },
      lineage,
    });
  const extra = [...(parts.quantities ?? [])].map(([symbol, { unit, values }]) => derivedColumn(symbol, values, unit));
  const path = {
    process,
    F,
    meaning,
    liquid: phase(parts.liquid, extra),
    ...(parts.solid === undefined ? {} : { solid: phase(parts.solid, []) }),
    ...(parts.cumulate === undefined ? {} : { cumulate: phase(parts.cumulate, []) }),
    coefficients,
    notes,
    lineage,
  };
  return showAs(path, (it) => {
    const shown = pickRows(F.length, 12);
    const columns = [...it.liquid.columns.values()];
    const heads = columns.map(({ symbol, unit }) =>
      symbol === 'F' ? `F (${meaning})` : unit === '' ? symbol : `${symbol} (${unit === 'wt%' ? 'wt %' : unit})`,
    );
    const rows = shown.map((row): TableCell[] => columns.map(({ values }) => values[row]));
    return {
      title: `${process}: liquid at ${shown.length} of ${F.length} steps`,
      columns: heads,
      rows,
      notes: [...notes, ...describeCoefficients(coefficients)],
    };
  });
}

/** Evenly chosen row numbers, first and last among them. */
function pickRows(size: number, most: number): number[] {
  if (size <= most) return Array.from({ length: size }, (_, i) => i);
  return [...new Set(Array.from({ length: most }, (_, i) => Math.round((i * (size - 1)) / (most - 1))))];
}

/** One line a mineral and melt type: where its coefficients come from and how far they are checked. */
export function describeCoefficients(coefficients: readonly UsedCoefficient[]): readonly string[] {
  const groups = new Map<string, string[]>();
  for (const { mineral, analyte, meltType, value, source, standing } of coefficients) {
    const cited = standing === 'supplied' ? source : `${shortSource(source)}, ${standing}`;
    const key = `${mineral}, ${meltType === 'supplied' ? 'own coefficients' : `${meltType} melt`} (${cited})`;
    const list = groups.get(key) ?? [];
    list.push(`${analyte} ${value}`);
    groups.set(key, list);
  }
  return [...groups].map(([key, list]) => `D ${key}: ${list.join(', ')}`);
}
