import type { Step } from '../suite';
import { diagramOf, type Diagram, type DiagramCounts } from './diagram';
import { wrapText, textWidth } from './font';
import { frameBox, type Frame, type VegaSpec } from './frame';
import { unit, type Canvas, type Layer } from './layer';
import { LabelPlacer } from './place-labels';
import { fontStack, ink, textSize, themeConfig } from './theme';

/** One frame with its layers. */
export interface Panel {
  readonly frame: Frame;
  readonly layers: readonly Layer[];
  /** Set above the panel, small and bold. */
  readonly heading?: string;
}

/** Everything that makes a figure; see the head of index.ts. */
export interface FigureParts {
  /** What the diagram is called: `Total alkalis–silica diagram`. */
  readonly name: string;
  readonly panels: readonly Panel[];
  /** Panels side by side before a new row begins (default: up to 3). */
  readonly columns?: number;
  /** Set above the figure; papers want none, so there is none by default. */
  readonly title?: string;
  /** Sentences of the caption: source of the boundaries, basis, what open symbols mean … The counts are added. */
  readonly caption: readonly string[];
  readonly counts?: DiagramCounts;
  /** Whether the caption says the counts (default true); a caption of several panels may say its own. */
  readonly showCounts?: boolean;
  /** What the counts count (default `sample`). */
  readonly counted?: string;
  /** Width that a legend on the right needs, in pixels, so that the caption may run as wide as the figure. */
  readonly legendWidth?: number;
  readonly lineage: readonly Step[];
}

/** A front end without the shipped font sets the caption in a wider one, and cuts what runs over: so the lines end well before the edge. */
const captionShare = 0.84;

const noCounts: DiagramCounts = { plotted: 0, notPlotted: 0, reasons: {} };

/**
 * Composes panels of layers, title and caption into a diagram with the one look of all.
 *
 * @throws RangeError when there is no panel
 */
export function figure(parts: FigureParts): Diagram {
  if (parts.panels.length === 0) throw new RangeError(`${parts.name}: a figure needs at least one panel.`);
  const columns = Math.max(1, Math.min(parts.columns ?? 3, parts.panels.length));
  const views = parts.panels.map((panel, i) => panelView(panel, i, i === 0 ? parts.title : undefined));
  const widest = Math.max(...parts.panels.map(({ frame }) => frame.width));
  const width = columns * widest + (columns - 1) * 60 + 55 + (parts.legendWidth ?? 0);
  const sentences = [
    ...parts.caption,
    ...(parts.counts === undefined || parts.showCounts === false ? [] : [countsText(parts.counts, parts.counted)]),
  ].filter((text) => text !== '');
  const lines = wrapText(sentences.join(' '), captionShare * Math.max(width, 380), { size: textSize.caption });
  const called = [parts.title, parts.name].filter(Boolean).join(' – ');
  const description = parts.counts === undefined ? called : `${called}: ${countsText(parts.counts, parts.counted)}`;
  const title =
    lines.length === 0
      ? {}
      : {
          title: {
            text: lines,
            orient: 'bottom',
            anchor: 'start',
            frame: 'bounds',
            offset: 12,
            align: 'left',
            color: ink.caption,
            font: fontStack,
            fontSize: textSize.caption,
            fontWeight: 'normal',
            lineHeight: textSize.caption * 1.3,
            limit: 4000,
          },
        };
  const single = views.length === 1;
  const spec: VegaSpec = {
    $schema: 'https://vega.github.io/schema/vega-lite/v5.json',
    description,
    background: ink.ground,
    padding: 10,
    config: themeConfig,
    ...title,
    ...(single ? views[0] : { concat: views, columns, spacing: 26, resolve: { scale: { fill: 'shared', shape: 'shared', color: 'shared' } } }),
  };
  return diagramOf({ name: parts.name, spec, lineage: parts.lineage, counts: parts.counts ?? noCounts, description });
}

function panelView(panel: Panel, number: number, title: string | undefined): VegaSpec {
  const { frame, layers } = panel;
  const placer = new LabelPlacer(frameBox(frame));
  const canvas: Canvas = { frame, placer, panel: number };
  for (const layer of layers) layer.claim?.(canvas);
  const drawn = new Map<Layer, readonly VegaSpec[]>();
  for (const layer of [...layers].sort((a, b) => (a.labelRank ?? 0) - (b.labelRank ?? 0))) drawn.set(layer, layer.draw(canvas));
  const units = layers.flatMap((layer) => drawn.get(layer)!);
  const heads = [
    ...(panel.heading === undefined ? [] : [headUnit(panel.heading, -8, 12)]),
    ...(title === undefined ? [] : [headUnit(title, panel.heading === undefined ? -14 : -28, textSize.title)]),
  ];
  // A panel with nothing to draw still shows its axes.
  const body = units.length === 0 ? [unit(frame, { type: 'point', opacity: 0 }, [{}])] : units;
  return { width: frame.width, height: frame.height, layer: [...body, ...heads] };
}

/** A text above the frame, at its left edge. */
function headUnit(text: string, y: number, fontSize: number): VegaSpec {
  return {
    data: { values: [{}] },
    mark: {
      type: 'text',
      text,
      x: 0,
      y,
      align: 'left',
      baseline: 'bottom',
      font: fontStack,
      fontSize,
      fontWeight: 600,
      color: ink.text,
      clip: false,
      tooltip: null,
    },
  };
}

/** A count with its thousands apart: 12,345. */
export function countText(count: number): string {
  return String(count).replace(/\B(?=(\d{3})+$)/g, ',');
}

/** `120 samples plotted; 3 not plotted (2 no K₂O, 1 below detection).` */
export function countsText({ plotted, notPlotted, reasons }: DiagramCounts, counted = 'sample'): string {
  const whys = Object.entries(reasons)
    .filter(([, count]) => count > 0)
    .map(([reason, count]) => `${countText(count)} ${reason}`);
  const left = notPlotted === 0 ? '' : `; ${countText(notPlotted)} not plotted${whys.length === 0 ? '' : ` (${whys.join(', ')})`}`;
  return `${countText(plotted)} ${counted}${plotted === 1 ? '' : 's'} plotted${left}.`;
}

/** Room that a legend with these entries takes on the right of a figure, in pixels. */
export function legendRoom(title: string, names: readonly string[]): number {
  const style = { size: textSize.legend };
  return Math.min(300, Math.max(textWidth(title, { ...style, bold: true }), ...names.map((name) => textWidth(name, style) + 20)) + 24);
}
