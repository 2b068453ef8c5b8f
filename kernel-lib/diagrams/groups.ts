import type { Suite } from '../suite';
import type { VegaSpec } from './frame';
import { groupColours, groupShapes, ink } from './theme';

/** Colours, shapes and legend of the groups of a figure. */
export interface GroupScale {
  /** Title of the legend: the label that groups. */
  readonly title: string;
  readonly names: readonly string[];
  readonly colours: VegaSpec;
  readonly shapes: VegaSpec;
  readonly legend: VegaSpec;
  readonly colourOf: (name: string) => string;
}

export interface Grouping {
  readonly scale: GroupScale;
  /** Number of each sample's group in `scale.names`. */
  readonly index: Uint16Array;
  /** How many small groups were put together as "other". */
  readonly pooled: number;
}

/** Groups told apart at a glance: more than this, and the smallest are pooled. */
const mostGroups = 14;

/** Colour of the nth group. */
export function groupColour(n: number): string {
  return groupColours[n % groupColours.length];
}

/** Scales for groups of these names, in this order; `other` is drawn in grey. */
export function groupScale(title: string, names: readonly string[], other?: string): GroupScale {
  const real = names.filter((name) => name !== other);
  const colourOf = (name: string) => (name === other ? ink.pooled : groupColour(real.indexOf(name)));
  const shapeOf = (name: string) => (name === other ? 'circle' : groupShapes[real.indexOf(name) % groupShapes.length]);
  return {
    title, names, colourOf,
    colours: { domain: names, range: names.map(colourOf) },
    shapes: { domain: names, range: names.map(shapeOf) },
    legend: { title, symbolSize: 70, symbolStrokeWidth: 0, symbolOpacity: 1, symbolLimit: 0, ...(names.length > 20 ? { columns: 2 } : {}) },
  };
}

/**
 * The groups of a suite by one of its labels, in order of first appearance. Beyond 14 groups the smallest are pooled.
 *
 * @throws RangeError for a label that the suite lacks
 */
export function groupSuite(suite: Suite, label: string, most = mostGroups): Grouping {
  const texts = suite.label(label).map((text) => (text.trim() === '' ? 'not given' : text));
  const counts = new Map<string, number>();
  for (const text of texts) counts.set(text, (counts.get(text) ?? 0) + 1);
  let names = [...counts.keys()];
  let pooled = 0;
  let other: string | undefined;
  if (names.length > most) {
    const largest = new Set([...counts].sort((a, b) => b[1] - a[1]).slice(0, most - 1).map(([name]) => name));
    pooled = names.length - largest.size;
    other = `other (${pooled})`;
    names = [...names.filter((name) => largest.has(name)), other];
  }
  const numbers = new Map(names.map((name, i) => [name, i]));
  const index = Uint16Array.from(texts, (text) => numbers.get(text) ?? names.length - 1);
  return { scale: groupScale(label, names, other), index, pooled };
}
