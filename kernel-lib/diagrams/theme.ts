/**
 * One look for every diagram. All colours are written into the specification's own config, so that a dark front end, which brings a theme
 * of its own, leaves white ground and dark text as they are.
 */

/** The family that is shipped, then what a browser without it may use. */
export const fontFamily = 'Source Sans 3';
export const fontStack = `${fontFamily}, Source Sans Pro, Helvetica Neue, Arial, sans-serif`;

/** Okabe & Ito's colours, safe for colour-blind readers; their yellow is left out, because it vanishes on white. */
export const groupColours = ['#0072B2', '#D55E00', '#009E73', '#CC79A7', '#E69F00', '#56B4E9', '#000000'] as const;

/** Closed marker shapes, so that each can also be drawn open. Six against seven colours: the pairs repeat after 42 groups. */
export const groupShapes = ['circle', 'square', 'triangle-up', 'diamond', 'triangle-down', 'cross'] as const;

export const ink = {
  text: '#1a1a1a',
  axis: '#404040',
  /** Boundaries of fields, reference lines. */
  line: '#9a9a9a',
  faintLine: '#d0d0d0',
  /** Names of fields. */
  fieldName: '#6b6b6b',
  caption: '#555555',
  /** Groups that were put together because there are too many. */
  pooled: '#b3b3b3',
  path: '#333333',
  ground: '#ffffff',
} as const;

export const textSize = { axisLabel: 12, axisTitle: 13, fieldName: 11.5, note: 11, caption: 11, legend: 12, title: 15 } as const;

/** Area of a marker, in square pixels, by how many there are: many samples want small markers. */
export function markerArea(count: number): number {
  return count <= 200 ? 52 : count <= 1000 ? 38 : count <= 2500 ? 26 : 18;
}

/** The Vega-Lite config of every diagram. Everything that front ends' dark themes set is set here. */
export const themeConfig = {
  background: ink.ground,
  font: fontStack,
  customFormatTypes: false,
  view: { stroke: null, fill: ink.ground, cursor: 'default' },
  axis: {
    domainColor: ink.axis, domainWidth: 1, tickColor: ink.axis, tickWidth: 1, tickSize: 5, grid: false, gridColor: '#ececec',
    labelColor: ink.text, labelFont: fontStack, labelFontSize: textSize.axisLabel, labelFontWeight: 'normal', labelPadding: 4, labelLimit: 400,
    titleColor: ink.text, titleFont: fontStack, titleFontSize: textSize.axisTitle, titleFontWeight: 'normal', titlePadding: 9, titleLimit: 1000,
  },
  legend: {
    labelColor: ink.text, labelFont: fontStack, labelFontSize: textSize.legend, labelLimit: 260,
    titleColor: ink.text, titleFont: fontStack, titleFontSize: textSize.legend, titleFontWeight: 600, titleLimit: 260,
    symbolStrokeWidth: 1, strokeColor: null, fillColor: null, offset: 18, rowPadding: 3,
  },
  title: { color: ink.text, font: fontStack, fontSize: textSize.title, fontWeight: 600, subtitleColor: ink.caption, subtitleFont: fontStack },
  header: { labelColor: ink.text, titleColor: ink.text, labelFont: fontStack, titleFont: fontStack },
  text: { color: ink.text, font: fontStack, fontSize: textSize.note },
  mark: { font: fontStack },
  style: {
    'guide-label': { fill: ink.text, font: fontStack },
    'guide-title': { fill: ink.text, font: fontStack },
    'group-title': { fill: ink.text, font: fontStack },
    'group-subtitle': { fill: ink.caption, font: fontStack },
  },
  range: { category: [...groupColours], heatmap: { scheme: 'viridis' }, ramp: { scheme: 'viridis' } },
} as const;
