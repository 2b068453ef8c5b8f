import type { MassBalance, TraceTest } from '../models';
import { step } from '../suite';
import { shortSource } from '../tables';
import { symbolText } from './chemical-text';
import type { Diagram } from './diagram';
import { figure } from './figure';
import { windowAround, type Frame } from './frame';
import { unit, specNumber, type Layer } from './layer';
import { barsLayer } from './layers/bars';
import { linesLayer } from './layers/lines';
import { groupColours, ink } from './theme';

/** Title and size of a diagram of a result. */
export interface ResultDiagramOptions {
  readonly title?: string;
  /** Pixels. */
  readonly width?: number;
  readonly height?: number;
}

function checkSize(who: string, { width, height }: ResultDiagramOptions): void {
  for (const [name, value] of Object.entries({ width, height })) {
    if (value !== undefined && !(Number.isFinite(value) && value >= 80))
      throw new RangeError(`${who}: ${name} is ${String(value)}; give pixels, 80 or more.`);
  }
}

/**
 * Residuals of a mass balance, a bar an oxide: parent − fit over its 1σ, or in wt % where the balance knows no errors.
 *
 * @param balance the result of `massBalance`
 * @param options `title`, `width`, `height`
 * @throws TypeError for anything else
 * @example diagrams.balanceResiduals(massBalance({ parent, daughter, minerals }))
 */
export function balanceResiduals(balance: MassBalance, options: ResultDiagramOptions = {}): Diagram {
  const who = 'balanceResiduals';
  if (!Array.isArray(balance?.residuals)) throw new TypeError(`${who}: give a solved mass balance, as massBalance returns it.`);
  checkSize(who, options);
  const { residuals } = balance;
  const inSigma = residuals.every(({ sigma }) => sigma > 0);
  const values = residuals.map(({ residual, sigma }) => (inSigma ? residual / sigma : residual));
  const reach = Math.max(inSigma ? 2.4 : 0.05, ...values.map((value) => Math.abs(value) * 1.12));
  const frame: Frame = {
    width: options.width ?? Math.max(340, 44 * residuals.length),
    height: options.height ?? 240,
    x: { title: '', window: [-0.5, residuals.length - 0.5], names: residuals.map(({ oxide }) => symbolText(oxide)) },
    y: { title: inSigma ? 'parent − fit (in 1σ)' : 'parent − fit (wt %)', window: [-reach, reach] },
  };
  const across = (at: number) =>
    [
      [-0.5, at],
      [residuals.length - 0.5, at],
    ] as const;
  const marks = [{ points: across(0), colour: ink.axis, width: 1 }, ...(inSigma ? [2, -2].map((at) => ({ points: across(at), dash: [4, 3] })) : [])];
  const bars = residuals.map(({ oxide, residual }, place) => ({
    place,
    value: values[place],
    name: `${symbolText(oxide)} ${residual.toFixed(3)} wt %`,
    colour: inSigma && Math.abs(values[place]) > 2 ? groupColours[1] : groupColours[0],
  }));
  const fit = Number.isFinite(balance.chiSquare)
    ? ` χ² ${balance.chiSquare.toPrecision(3)} for ${balance.degreesOfFreedom} degrees of freedom (probability ` +
      `${balance.probability.toPrecision(2)}).`
    : '';
  return figure({
    name: 'Residuals of a mass balance',
    title: options.title,
    panels: [{ frame, layers: [barsLayer(bars, { valueTitle: inSigma ? 'in 1σ' : 'wt %' }), linesLayer(marks)] }],
    caption: [
      `${balance.parent.samples[0]} = ${balance.F.value.toFixed(3)} · ${balance.daughter.samples[0]} + ${balance.phases
        .filter(({ value }) => value !== 0)
        .map(({ phase, label, value }) => `${(100 * value).toFixed(1)} % ${phase} (${label})`)
        .join(' + ')}.`,
      `ΣR² ${balance.sumOfSquares.toPrecision(3)}.${fit} Errors: ${balance.errorModel}.`,
      ...(inSigma ? ['Dashed: ±2σ.'] : []),
    ],
    lineage: [...balance.lineage, step('diagrams.balanceResiduals')],
  });
}

/** Bars of the predicted ranges and markers of the observed values, on a log axis of daughter over parent. */
function rangesLayer(test: TraceTest, order: readonly number[]): Layer {
  return {
    draw({ frame }) {
      const at = order.map((e) => test.elements[e]);
      const [floor, ceiling] = frame.y.window;
      const ranges = at.map(({ element, low, high, parent }, place) => ({
        x: specNumber(place - 0.28),
        x2: specNumber(place + 0.28),
        y: specNumber(Math.max(floor, low / parent)),
        y2: specNumber(Math.min(ceiling, high / parent)),
        n: element,
        a: specNumber(low),
        b: specNumber(high),
      }));
      const centres = at.map(({ predicted, parent }, place) => ({
        x: specNumber(place - 0.28),
        x2: specNumber(place + 0.28),
        y: specNumber(predicted / parent),
      }));
      const observed = at.map(({ element, observed: value, observedSigma, parent, finding, outside }, place) => ({
        x: place,
        y: specNumber(value / parent),
        lo: specNumber(Math.max(floor, (value - 2 * observedSigma) / parent)),
        hi: specNumber((value + 2 * observedSigma) / parent),
        n: element,
        v: specNumber(value),
        f: finding,
        o: specNumber(outside),
        c: finding === 'disagrees' ? groupColours[1] : finding === 'too wide' ? ink.pooled : groupColours[0],
      }));
      const colour = { field: 'c', type: 'nominal', scale: null };
      return [
        unit(frame, { type: 'rect', color: '#d9d9d9' }, ranges, {
          x2: { field: 'x2' },
          y2: { field: 'y2' },
          tooltip: [
            { field: 'n', type: 'nominal', title: 'element' },
            { field: 'a', type: 'quantitative', title: 'predicted from (ppm)' },
            { field: 'b', type: 'quantitative', title: 'to (ppm)' },
          ],
        }),
        unit(frame, { type: 'rule', color: ink.line, strokeWidth: 1.4, tooltip: null }, centres, { x2: { field: 'x2' } }),
        unit(
          frame,
          { type: 'rule', strokeWidth: 1.2, tooltip: null },
          observed.map(({ x, lo, hi, c }) => ({ x, y: lo, y2: hi, c })),
          { y2: { field: 'y2' }, color: colour },
        ),
        unit(frame, { type: 'point', filled: true, size: 62, opacity: 1, shape: 'circle' }, observed, {
          color: colour,
          tooltip: [
            { field: 'n', type: 'nominal', title: 'element' },
            { field: 'v', type: 'quantitative', title: 'observed (ppm)' },
            { field: 'f', type: 'nominal', title: 'finding' },
            { field: 'o', type: 'quantitative', title: 'outside by (σ)' },
          ],
        }),
      ];
    },
  };
}

/**
 * Predicted against observed for every element of a trace test, over the parent's concentration: bars are what the published coefficients allow,
 * points are the daughter.
 *
 * @param test the result of `testTraces`
 * @param options `title`, `width`, `height`
 * @throws TypeError for anything else; RangeError when no element was tested
 * @example diagrams.predictedObserved(testTraces(balance))
 */
export function predictedObserved(test: TraceTest, options: ResultDiagramOptions = {}): Diagram {
  const who = 'predictedObserved';
  if (!Array.isArray(test?.elements) || typeof test.verdict !== 'string') throw new TypeError(`${who}: give the result of testTraces.`);
  checkSize(who, options);
  if (test.elements.length === 0) throw new RangeError(`${who}: no element was tested; the test's notes say which coefficients are missing.`);
  const order = test.elements.map((_, e) => e).sort((a, b) => test.elements[a].bulk - test.elements[b].bulk);
  const parts = test.elements.flatMap(({ low, high, observed, parent }) => [low / parent, high / parent, observed / parent]);
  // A range may reach down to nothing; what is below a hundredth of the parent is cut off at the frame.
  const frame: Frame = {
    width: options.width ?? Math.max(340, 34 * order.length),
    height: options.height ?? 300,
    x: { title: 'increasing bulk D →', window: [-0.5, order.length - 0.5], names: order.map((e) => test.elements[e].element) },
    y: {
      title: 'daughter / parent',
      scale: 'log',
      window: windowAround([parts.filter((value) => value > 0.01), [1]], { scale: 'log', leastSpan: 4 }),
    },
  };
  const sources = [...new Set(test.coefficients.filter(({ standing }) => standing !== 'supplied').map(({ source }) => source))].map(shortSource);
  return figure({
    name: 'Predicted against observed trace elements',
    title: options.title,
    panels: [
      {
        frame,
        layers: [
          linesLayer([
            {
              points: [
                [-0.5, 1],
                [order.length - 0.5, 1],
              ],
              dash: [4, 3],
            },
          ]),
          rangesLayer(test, order),
        ],
      },
    ],
    caption: [
      test.why,
      'Grey bars: predicted range, with a line at the preferred coefficients; points: observed, ±2σ (orange: outside by more than 2σ; ' +
        'grey: range too wide to tell).',
      ...(sources.length > 0 ? [`Coefficients: ${sources.join(', ')}.`] : []),
    ],
    counts: {
      plotted: test.elements.length,
      notPlotted: new Set(test.missing.map(({ analyte }) => analyte)).size,
      reasons: { 'without a coefficient': new Set(test.missing.map(({ analyte }) => analyte)).size },
    },
    counted: 'element',
    lineage: [...test.lineage, step('diagrams.predictedObserved')],
  });
}
