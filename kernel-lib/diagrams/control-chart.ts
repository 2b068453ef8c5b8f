import type { Audit, Recovery } from '../assay';
import { step } from '../suite';
import { symbolText } from './chemical-text';
import type { Diagram } from './diagram';
import { figure, type Panel } from './figure';
import { windowAround, type Frame } from './frame';
import { specNumber, unit, type Layer } from './layer';
import { linesLayer, type LineShape } from './layers/lines';
import { groupColours, ink } from './theme';

/** What a control chart takes. */
export interface ControlChartOptions {
  /** One reference material (default: the one with the most runs). */
  readonly material?: string;
  readonly title?: string;
  /** Pixels, of one panel. */
  readonly width?: number;
  readonly height?: number;
  /** Panels side by side (default 2). */
  readonly columns?: number;
}

const mostPanels = 24;

/**
 * Control chart of a reference material: recovery of each run in the order of analysis, against the certified value (100 %) and the usual
 * limits about the mean of the runs (±2 and ±3 standard deviations; common practice). A run beyond three is drawn in orange.
 *
 * @param audit what `audit` returned
 * @param analytes symbols, one panel each, e.g. `['SiO2', 'Ba']`
 * @param options `material`, `columns`, `title`, `width`, `height`
 * @throws TypeError for something that is no audit; RangeError for an analyte or material without runs
 * @example diagrams.controlChart(checked, ['SiO2', 'K2O', 'Ba', 'La'])
 */
export function controlChart(audit: Audit, analytes: readonly string[], options: ControlChartOptions = {}): Diagram {
  const who = 'controlChart';
  if (!Array.isArray(audit?.recoveries)) throw new TypeError(`${who}: the first argument must be what audit() returned.`);
  const list = typeof analytes === 'string' ? [analytes] : analytes;
  if (!Array.isArray(list) || list.length === 0 || list.length > mostPanels) throw new RangeError(`${who}: analytes must be a list of 1 to ${mostPanels} symbols, e.g. ['SiO2', 'Ba'].`);
  const { width = 300, height = 150, columns = 2 } = options;
  if (!Number.isInteger(columns) || columns < 1) throw new RangeError(`${who}: columns must be a whole number from 1, not ${String(columns)}.`);
  const materials = runsByMaterial(audit.recoveries);
  const [most] = [...materials].sort(([, a], [, b]) => b - a);
  if (most === undefined) throw new RangeError(`${who}: the sheet held no reference material that is in the tables (rockMaterialNames() lists them).`);
  const material = options.material ?? most[0];
  if (!materials.has(material)) throw new RangeError(`${who}: there are no runs of "${material}". There are: ${[...materials.keys()].join(', ')}.`);

  const panels: Panel[] = [];
  let plotted = 0;
  let beyond = 0;
  for (const analyte of list) {
    const runs = audit.recoveries.filter((run) => run.material === material && run.analyte === analyte && Number.isFinite(run.recovery));
    if (runs.length === 0) {
      const covered = [...new Set(audit.recoveries.filter((run) => run.material === material).map((run) => run.analyte))];
      throw new RangeError(`${who}: ${material} has no runs of "${analyte}". It has: ${covered.join(', ')}.`);
    }
    const { frame, lines, out } = chart(runs, symbolText(analyte), { width, height });
    plotted += runs.length;
    beyond += out.size;
    panels.push({ frame, layers: [linesLayer(lines), runsLayer(frame, runs, out)] });
  }
  return figure({
    name: `Control chart of ${material}`,
    title: options.title,
    panels,
    columns: Math.min(columns, panels.length),
    caption: [
      `${material}: recovery of each run in the order of analysis. Solid: certified value; grey: mean of the runs; dashed: ±2 and ±3 standard deviations about it` +
        `${beyond > 0 ? '; orange: beyond three' : ''}.`,
    ],
    counts: { plotted, notPlotted: 0, reasons: {} },
    counted: 'run',
    lineage: [...audit.lineage, step('diagrams.controlChart', { material, analytes: list })],
  });
}

function runsByMaterial(recoveries: readonly Recovery[]): Map<string, number> {
  const rows = new Map<string, Set<number>>();
  for (const { material, row } of recoveries) rows.set(material, (rows.get(material) ?? new Set()).add(row));
  return new Map([...rows].map(([material, set]) => [material, set.size]));
}

function chart(runs: readonly Recovery[], name: string, size: { readonly width: number; readonly height: number }): { frame: Frame; lines: LineShape[]; out: ReadonlySet<Recovery> } {
  const values = runs.map(({ recovery }) => recovery);
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  const spread = values.length < 3 ? NaN : Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1));
  const limits = Number.isFinite(spread) ? [-3, -2, 2, 3].map((k) => mean + k * spread) : [];
  const rows = runs.map(({ row }) => row + 1);
  const frame: Frame = {
    ...size,
    x: { title: 'row of the sheet, in the order of analysis', window: windowAround([rows]) },
    y: { title: `${name} recovery (%)`, window: windowAround([values, limits, [100]]) },
  };
  const [low, high] = frame.x.window;
  const across = (at: number) => [[low, at], [high, at]] as const;
  const lines: LineShape[] = [
    { points: across(100), colour: ink.axis, width: 1 },
    { points: across(mean) },
    ...limits.map((at) => ({ points: across(at), dash: [4, 3] })),
  ];
  return { frame, lines, out: new Set(runs.filter(({ recovery }) => Math.abs(recovery - mean) > 3 * spread)) };
}

function runsLayer(frame: Frame, runs: readonly Recovery[], out: ReadonlySet<Recovery>): Layer {
  const rows = runs.map((run) => ({
    x: run.row + 1, y: specNumber(run.recovery), t0: run.sample, m: specNumber(run.measured), c: specNumber(run.certified), k: out.has(run) ? groupColours[1] : groupColours[0],
  }));
  return {
    draw: () => [
      unit(frame, { type: 'point', filled: true, size: 42, opacity: 0.95 }, rows, {
        fill: { field: 'k', type: 'nominal', scale: null, legend: null },
        tooltip: [
          { field: 't0', type: 'nominal', title: 'run' },
          { field: 'm', type: 'quantitative', title: 'measured' },
          { field: 'c', type: 'quantitative', title: 'certified' },
          { field: 'y', type: 'quantitative', title: 'recovery (%)', format: '.1f' },
        ],
      }),
    ],
  };
}
