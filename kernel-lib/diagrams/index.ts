/**
 * diagrams/: every diagram as a Vega-Lite 5 specification that carries its data, with one look for all, drawn to PNG, SVG, PDF and HTML.
 *
 * How a new diagram is written. A figure is panels; a panel is a frame and layers; `figure` does the rest (theme, label places, caption,
 * counts, drawing). One file a diagram; export its function here.
 *
 *     import { axisTitle } from './chemical-text';
 *     import { figure } from './figure';
 *     import { windowAround, type Frame } from './frame';
 *     import { curve, linesLayer } from './layers/lines';
 *     import { samplePoints } from './sample-points';
 *     import { samplesLayer } from './layers/samples';
 *
 *     export function strontiumYttrium(suite: Suite, options: SampleOptions = {}): Diagram {
 *       const { points, counts, notes, legendWidth } = samplePoints('strontiumYttrium', suite, { x: 'Y', y: 'Sr/Y' }, options);
 *       const frame: Frame = {
 *         width: 460, height: 360,
 *         x: { title: axisTitle('Y', 'ppm'), window: windowAround([points.x]) },
 *         y: { title: axisTitle('Sr/Y'), window: windowAround([points.y]) },
 *       };
 *       return figure({
 *         name: 'Sr/Y–Y diagram', panels: [{ frame, layers: [linesLayer([{ points: curve(frame, () => 40), label: 'Sr/Y 40' }]), samplesLayer(points)] }],
 *         caption: ['Criterion: …', ...notes], counts: counts(frame), legendWidth, lineage: [...suite.lineage, step('diagrams.strontiumYttrium', {…}, { sources: [...] })],
 *       });
 *     }
 *
 * Layers there are: `samplesLayer` (markers by group, open where altered, arrows for limits, errors, bins), `fieldsLayer` (polygons and
 * their names), `linesLayer` (+ `curve`), `bandsLayer`, `pathsLayer` (ticks, labels), `markersLayer` (reservoirs), `vectorsLayer`,
 * `seriesLayer` (patterns), `barsLayer` (on an axis with `names`), `namesLayer` (sample names), and `ternaryFrame`, `ternaryLayer`,
 * `ternaryPoint` for triangles. A layer of your own is an object
 * `{ claim?, labelRank?, draw }` (layer.ts): `claim` tells the label placer what is solid, `draw` returns Vega-Lite units made with `unit`,
 * `lineUnit`, `labelUnit`. A specification that fits none of this can still have the look and the files: `diagramOf({ spec: { config:
 * themeConfig, … }, … })`. Texts: `symbolText`, `expressionText`, `axisTitle`, `numberText`. Look at every figure:
 * `node tests/diagrams/gallery.mjs`.
 */
export * from './chemical-text';
export * from './diagram';
export * from './figure';
export { textWidth, type TextStyle } from './font';
export { checkWindow, windowAround, type Axis, type Frame, type VegaSpec, type WindowChoice, type WindowHints } from './frame';
export type { Box, Point } from './geometry';
export { groupScale, groupSuite, type Grouping, type GroupScale } from './groups';
export * from './layer';
export { LabelPlacer, type PlacedLabel } from './place-labels';
export { specWarnings } from './render';
export * from './layers/bars';
export * from './layers/fields';
export * from './layers/lines';
export * from './layers/markers';
export * from './layers/names';
export * from './layers/samples';
export * from './layers/series';
export * from './harker';
export * from './model-paths';
export * from './patterns';
export * from './sample-points';
export * from './screening';
export * from './screening-map';
export * from './save';
export * from './probability-bars';
export { scheme, type SchemeDiagramOptions } from './scheme';
export * from './ternary';
export { fontFamily, groupColours, groupShapes, ink, textSize, themeConfig } from './theme';
export * from './well-known';
export * from './xy';
export * from './isotope-plots';
export * from './slab-share-bars';
export * from './tracer-plots';
export * from './wedge-corner';
export { arcMap, type ArcMapOptions } from './arc-map';
export { slabSection, type SlabSectionOptions } from './slab-section';
export { arcTrendPlot, type ArcTrendPlotOptions } from './arc-trend-plot';
export * from './balance-plots';
export * from './path-plots';
export * from './control-chart';
