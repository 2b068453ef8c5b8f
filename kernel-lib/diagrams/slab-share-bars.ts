import { step, type Suite } from '../suite';
import { slabShares, type SlabShareOptions, type SlabShares } from '../tracers';
import { symbolText } from './chemical-text';
import type { Diagram } from './diagram';
import { figure, legendRoom } from './figure';
import type { Frame, VegaSpec } from './frame';
import { groupScale } from './groups';
import { specNumber, unit, type Layer } from './layer';
import { groupColours, ink } from './theme';

/** What the bars take. */
export interface SlabShareBarOptions extends SlabShareOptions {
  readonly title?: string;
  readonly width?: number;
  readonly height?: number;
}

/**
 * Bars of the slab-derived share of each element, mobile elements left, with 1σ; one bar a group, or one for all samples.
 *
 * @param of a suite, or the result of `slabShares` with a `group`
 * @param options those of `slabShares`; `title`, `width`, `height`
 * @throws RangeError for bad options or a suite without Nb or Yb
 * @source Pearce & Peate 1995; Pearce et al. 2005
 * @example diagrams.slabShareBars(suite, { group: 'volcano' })
 */
export function slabShareBars(of: Suite | SlabShares, options: SlabShareBarOptions = {}): Diagram {
  const shares = 'shares' in of ? of : sharesOf(of, options);
  if (shares.groups.length === 0)
    throw new RangeError('slabShareBars: the shares hold no group with a sample in it; give a suite and a group, or a wider filter.');
  const { elements, groups } = shares;
  const known = elements.map((_, e) => e).filter((e) => groups.some(({ median }) => Number.isFinite(median[e])));
  const drawn = known.map((e) => elements[e]);
  const lowest = Math.min(0, ...groups.flatMap(({ median }) => known.map((e) => median[e]).filter(Number.isFinite)));
  const single = groups.length === 1;
  const room = Math.max(24, Math.min(46, 7 * groups.length + 8));
  const frame: Frame = {
    width: options.width ?? Math.max(360, room * drawn.length),
    height: options.height ?? 300,
    x: { title: '', window: [-0.5, drawn.length - 0.5], names: drawn.map(symbolText) },
    y: { title: 'slab-derived share (%)', window: [lowest < -5 ? Math.max(-50, 25 * Math.floor(lowest / 25)) : 0, 100] },
  };
  const scale = groupScale(
    shares.group ?? 'group',
    groups.map(({ name }) => groupText(name)),
  );
  const counted = shares.kept.reduce((sum, each) => sum + each, 0);
  const sigmaNote =
    'Bars: median share of each element above the oceanic-basalt array at the Nb/Yb of the sample; whiskers 1σ (scatter and array). ' +
    'Pearce & Peate 1995; Pearce et al. 2005.';
  const left = shares.samples.length - counted;
  return figure({
    name: 'Slab-derived share by element',
    title: options.title,
    panels: [{ frame, layers: [barsLayer(shares, known, single ? undefined : scale)] }],
    caption: [sigmaNote, ...shares.notes.filter((note) => /left out|Not asked/i.test(note))],
    counts: { plotted: counted, notPlotted: left, reasons: left > 0 ? { 'left out by the filter, or not asked': left } : {} },
    legendWidth: single ? 0 : legendRoom(scale.title, scale.names),
    lineage: [...shares.lineage, step('diagrams.slabShareBars', { elements: drawn, groups: groups.map(({ name }) => name) })],
  });
}

const everything = 'all samples';
const groupText = (name: string): string => (name.trim() === '' ? 'not given' : name);

function sharesOf(suite: Suite, options: SlabShareBarOptions): SlabShares {
  if (options.group !== undefined) return slabShares(suite, options);
  return slabShares(suite.withLabels({ [everything]: suite.samples.map(() => everything) }), { ...options, group: everything });
}

/** Share of a place along the axis that its bars fill. */
const filled = 0.82;

function barsLayer(shares: SlabShares, known: readonly number[], scale: ReturnType<typeof groupScale> | undefined): Layer {
  const count = shares.groups.length;
  return {
    draw({ frame }) {
      const rows = shares.groups.flatMap(({ name, samples, median, sigma }, g) =>
        known.flatMap((e, place) => {
          if (!Number.isFinite(median[e])) return [];
          const left = place - filled / 2 + (filled * g) / count;
          const pad = (filled / count) * 0.06;
          return [
            {
              x: specNumber(left + pad),
              x2: specNumber(left + filled / count - pad),
              m: specNumber(left + filled / count / 2),
              y: specNumber(Math.max(frame.y.window[0], median[e])),
              y2: 0,
              lo: specNumber(Math.max(frame.y.window[0], median[e] - sigma[e])),
              hi: specNumber(Math.min(100, median[e] + sigma[e])),
              g: groupText(name),
              e: shares.elements[e],
              n: samples,
              s: specNumber(median[e]),
              d: specNumber(sigma[e]),
            },
          ];
        }),
      );
      const tooltip = [
        { field: 'e', type: 'nominal', title: 'element' },
        { field: 'g', type: 'nominal', title: shares.group ?? 'group' },
        { field: 's', type: 'quantitative', title: 'share (%)', format: '.0f' },
        { field: 'd', type: 'quantitative', title: '1σ', format: '.0f' },
        { field: 'n', type: 'quantitative', title: 'samples' },
      ];
      const fill: VegaSpec =
        scale === undefined
          ? { value: groupColours[0] }
          : { field: 'g', type: 'nominal', scale: scale.colours, legend: { ...scale.legend, symbolType: 'square' } };
      const bars = unit(frame, { type: 'rect', opacity: 0.92 }, rows, { x2: { field: 'x2' }, y2: { field: 'y2' }, fill, tooltip });
      const whiskers = unit(
        frame,
        { type: 'rule', color: ink.axis, strokeWidth: 1, tooltip: null },
        rows.map(({ m, lo, hi }) => ({ x: m, y: lo, y2: hi })),
        { y2: { field: 'y2' } },
      );
      return [bars, whiskers];
    },
  };
}
