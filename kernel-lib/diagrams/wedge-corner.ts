import { step } from '../suite';
import { wedgeEstimateText, type OneWedgeFit, type WedgeFit, type WedgeParameterName } from '../tracers';
import type { Diagram } from './diagram';
import { figure, type Panel } from './figure';
import { roundStep, tidy, windowAround, type Axis, type Frame } from './frame';
import { lineUnit, specNumber, unit, type Layer } from './layer';
import { fontStack, groupColours, ink, textSize } from './theme';

/** What the corner diagram takes. */
export interface WedgeCornerOptions {
  /** Which fit, by sample or group name (default: the first). */
  readonly name?: string;
  readonly title?: string;
  /** Side of one panel in pixels (default 130). */
  readonly panel?: number;
}

const titles: Readonly<Record<WedgeParameterName, string>> = {
  melt: 'melt F (%)',
  fluid: 'fluid x (%)',
  sediment: 'sediment y (%)',
  priorMelt: 'prior m (%)',
};
const bins = 24;
/** More points than this only blacken the cloud. */
const mostPoints = 1000;

/**
 * Corner diagram of a fluxed-wedge fit: each parameter's distribution over the Monte Carlo draws, each pair against each other, and their
 * correlation, so that trade-offs can be seen.
 *
 * @param fit the result of `fitFluxedWedge`
 * @param options `name` of the sample or group, `title`, `panel`
 * @throws RangeError for an unknown name, or a fit without draws (too few elements)
 * @example diagrams.wedgeCorner(fit, { name: 'Ketu' })
 */
export function wedgeCorner(fit: WedgeFit, options: WedgeCornerOptions = {}): Diagram {
  const { panel: side = 130 } = options;
  if (!(side >= 60 && side <= 600)) throw new RangeError(`wedgeCorner: panel must be 60 to 600 pixels, not ${String(side)}.`);
  const one = options.name === undefined ? fit.fits[0] : fit.fits.find(({ name }) => name === options.name);
  if (one === undefined)
    throw new RangeError(`wedgeCorner: there is no fit "${String(options.name)}". There are: ${fit.fits.map(({ name }) => name).join(', ')}.`);
  if (one.draws.length === 0) throw new RangeError(`wedgeCorner: the fit of "${one.name}" has no draws. ${one.verdict}`);
  const percent = one.draws.map((draws) => draws.map((value) => 100 * value));
  const best = one.fitted.map((name) => 100 * one.parameters[name].value);
  const count = one.fitted.length;
  const axes = percent.map((values, k): Axis => {
    const window = windowAround([values, [best[k]]], { within: [0, 100], leastSpan: 0.02 * best[k] || 0.1 });
    return { title: titles[one.fitted[k]], window, ticks: ticksOf(window) };
  });
  const panels: Panel[] = [];
  for (let row = 0; row < count; row++) {
    for (let column = 0; column < count; column++) {
      const x: Axis = { ...axes[column], ...(row === count - 1 ? {} : { title: '' }) };
      const y: Axis = { ...axes[row], ...(column === 0 ? {} : { title: '' }) };
      const size = { width: side, height: side };
      if (row === column) panels.push(histogramPanel({ ...size, x, y }, percent[row], one, row));
      else if (row > column) panels.push({ frame: { ...size, x, y }, layers: [cloudLayer(percent[column], percent[row], best[column], best[row])] });
      else
        panels.push({
          frame: { ...size, x: { title: '', window: [0, 1], shown: false }, y: { title: '', window: [0, 1], shown: false } },
          layers: [textLayer(one.correlations[row][column])],
        });
    }
  }
  return figure({
    name: `Trade-offs of the fluxed-wedge fit of ${one.name}`,
    title: options.title,
    panels,
    columns: count,
    caption: [
      `${one.name}: ${one.draws[0].length} Monte Carlo draws; dark lines and crosses: best fit; r: correlation of each pair.`,
      one.fitted.map((name) => `${titles[name].replace(' (%)', '')} ${wedgeEstimateText(one.parameters[name])}`).join('; ') + '.',
      one.verdict,
    ],
    lineage: [...fit.lineage, step('diagrams.wedgeCorner', { name: one.name })],
  });
}

/** Three or four round ticks: a panel is too small for the usual spacing. */
function ticksOf([low, high]: readonly [number, number]): number[] {
  const step = roundStep(high - low, 4);
  const ticks: number[] = [];
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high * (1 + 1e-9); k++) ticks.push(tidy(k * step));
  return ticks;
}

function histogramPanel(frame: Frame, values: Float64Array, fit: OneWedgeFit, k: number): Panel {
  const [low, high] = frame.x.window;
  const counts = new Float64Array(bins);
  for (const value of values) {
    const bin = Math.min(bins - 1, Math.max(0, Math.floor((bins * (value - low)) / (high - low))));
    counts[bin]++;
  }
  const top = counts.reduce((most, each) => Math.max(most, each), 1) * 1.08;
  const { value, low: from, high: to } = fit.parameters[fit.fitted[k]];
  const own: Frame = { ...frame, y: { title: '', window: [0, top], shown: false } };
  const layer: Layer = {
    draw({ frame: at }) {
      const width = (high - low) / bins;
      const rows = Array.from(counts, (y, b) => ({ x: specNumber(low + b * width), x2: specNumber(low + (b + 1) * width), y: specNumber(y), y2: 0 }));
      const upright = (x: number): [number, number][] => [
        [100 * x, 0],
        [100 * x, top],
      ];
      return [
        unit(at, { type: 'rect', color: groupColours[0], opacity: 0.55, stroke: ink.ground, strokeWidth: 0.4, tooltip: null }, rows, {
          x2: { field: 'x2' },
          y2: { field: 'y2' },
        }),
        lineUnit(at, [upright(value)], { color: ink.path, strokeWidth: 1.3 }),
        lineUnit(at, [upright(from), upright(to)], { color: ink.path, strokeWidth: 1, strokeDash: [3, 3] }),
      ];
    },
  };
  return { frame: own, layers: [layer] };
}

function cloudLayer(xs: Float64Array, ys: Float64Array, bestX: number, bestY: number): Layer {
  const every = Math.ceil(xs.length / mostPoints);
  const rows: object[] = [];
  for (let i = 0; i < xs.length; i += every) rows.push({ x: specNumber(xs[i]), y: specNumber(ys[i]) });
  return {
    draw: ({ frame }) => [
      unit(frame, { type: 'point', filled: true, shape: 'circle', size: 6, color: groupColours[0], opacity: 0.35, tooltip: null }, rows),
      unit(
        frame,
        { type: 'point', shape: 'cross', filled: true, size: 70, color: ink.path, opacity: 1, stroke: ink.ground, strokeWidth: 0.8, tooltip: null },
        [{ x: specNumber(bestX), y: specNumber(bestY) }],
      ),
    ],
  };
}

function textLayer(correlation: number): Layer {
  const text = Number.isFinite(correlation) ? `r = ${correlation.toFixed(2).replace('-', '−')}` : 'r: none';
  return {
    draw: ({ frame }) => [
      unit(frame, { type: 'text', text, font: fontStack, fontSize: textSize.note + 1, color: ink.caption, tooltip: null }, [{ x: 0.5, y: 0.5 }]),
    ],
  };
}
