import { showAs, type Showable } from '../display';
import { step, type Step, type Suite } from '../suite';
import { centreOf } from './geodesy';
import { plausibleRanges, pointOut } from './plausibility';
import { medianOf } from './regression';
import { coordinatesOf, round } from './slab-below';

/** One volcano above the slab. */
export interface VolcanoAbove {
  readonly group: string;
  readonly samples: number;
  readonly longitude: number;
  readonly latitude: number;
  /** km; 1σ; degrees. Medians of the volcano's samples. */
  readonly depth: number;
  readonly depthSigma: number;
  readonly dip: number;
  readonly trenchDistance: number;
  readonly arcPosition: number;
  readonly support: string;
  /** Whether no other volcano nearby along the arc lies closer to the trench. */
  readonly front: boolean;
  /** What is unusual, by common practice. */
  readonly remarks: readonly string[];
}

export interface VolcanoesAbove {
  readonly volcanoes: readonly VolcanoAbove[];
  /** Stretches of the arc without a volcano, longer than usual between neighbours of the front. */
  readonly gaps: readonly { readonly from: string; readonly to: string; readonly length: number }[];
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/** A volcano belongs to the front when none within this distance along the arc lies closer to the trench by more than `frontWidth`, km. */
const frontStretch = 60;
const frontWidth = 25;

/**
 * A table of the volcanoes above a slab, front first, with what is unusual pointed out: depth below the front, flat or steep slab, depths that are
 * extrapolated, and gaps in the volcanic front. Values outside the usual ranges are allowed; the ranges are common practice.
 *
 * @param suite n samples that `slabBelow` has placed
 * @param options `by`: the label that names the volcano (default `volcano`)
 * @returns volcanoes in order of trench distance, gaps along the front, notes
 * @throws RangeError for a suite without the slab below, or an unknown label
 * @example volcanoesAbove(placed).volcanoes
 */
export function volcanoesAbove(suite: Suite, options: { readonly by?: string } = {}): VolcanoesAbove & Showable {
  const { by = 'volcano' } = options;
  if (!suite.has('SlabDepth'))
    throw new RangeError('volcanoesAbove: the suite has no column "SlabDepth". Join the slab first: slabBelow(slab, suite).');
  const { longitude, latitude } = coordinatesOf(suite, 'volcanoesAbove');
  const labels = suite.label(by);
  const support = suite.label('slabSupport');
  const rows = new Map<string, number[]>();
  labels.forEach((name, i) => {
    if (name === '' || !Number.isFinite(longitude[i])) return;
    rows.set(name, [...(rows.get(name) ?? []), i]);
  });
  const pick = (symbol: string, of: readonly number[]) => medianOf(of.map((i) => suite.values(symbol)[i]));
  const placed = [...rows].map(([group, of]) => {
    const centre = centreOf(
      of.map((i) => longitude[i]),
      of.map((i) => latitude[i]),
    );
    return {
      group,
      samples: of.length,
      ...centre,
      depth: pick('SlabDepth', of),
      depthSigma: medianOf(of.map((i) => suite.column('SlabDepth').sigma?.[i] ?? NaN)),
      dip: pick('SlabDip', of),
      trenchDistance: pick('TrenchDistance', of),
      arcPosition: pick('ArcPosition', of),
      support: support[of[0]],
    };
  });
  const front = (one: (typeof placed)[number]) =>
    Number.isFinite(one.trenchDistance) &&
    !placed.some((other) => Math.abs(other.arcPosition - one.arcPosition) <= frontStretch && other.trenchDistance < one.trenchDistance - frontWidth);
  const volcanoes = placed
    .map((one): VolcanoAbove => ({ ...one, front: front(one), remarks: remarksOn(one, front(one)) }))
    .sort((a, b) => (Number.isNaN(a.trenchDistance) ? a.depth - b.depth : a.trenchDistance - b.trenchDistance));
  const gaps = gapsAlong(volcanoes.filter((one) => one.front));
  const notes = [
    ...gaps.map(({ from, to, length }) => `A gap of ${length.toFixed(0)} km in the volcanic front of these samples, between ${from} and ${to}.`),
    `Usual ranges (common practice): ${[...plausibleRanges().values()]
      .filter(({ key }) => key.startsWith('front') || key === 'slab-dip')
      .map(({ name, from, to, unit }) => `${name} ${from}–${to} ${unit}`)
      .join(', ')}.`,
    'Nothing here forecasts eruptions.',
  ];
  const result: VolcanoesAbove = {
    volcanoes,
    gaps,
    notes,
    lineage: [
      ...suite.lineage,
      step(
        'volcanoesAbove',
        { by, volcanoes: volcanoes.length, gaps: gaps.length },
        { sources: ['common_practice'], tables: ['plausible-ranges.json'] },
      ),
    ],
  };
  return showAs(result, () => ({
    title: 'Volcanoes above the slab',
    columns: [by, 'samples', 'slab depth (km)', '1σ (km)', 'dip (°)', 'trench distance (km)', 'along arc (km)', 'front', 'support', 'remarks'],
    rows: volcanoes.map((v) => [
      v.group,
      v.samples,
      round(v.depth, 1),
      round(v.depthSigma, 1),
      round(v.dip, 1),
      round(v.trenchDistance, 1),
      round(v.arcPosition, 1),
      v.front ? 'front' : 'rear',
      v.support,
      v.remarks.join('; '),
    ]),
    notes,
  }));
}

function remarksOn(
  one: { readonly depth: number; readonly dip: number; readonly trenchDistance: number; readonly support: string },
  front: boolean,
): string[] {
  return [
    front ? pointOut('front-slab-depth', one.depth) : undefined,
    front ? pointOut('front-trench-distance', one.trenchDistance) : undefined,
    pointOut('slab-dip', one.dip),
    one.support === 'extrapolated' ? 'slab depth is extrapolated' : one.support === 'no slab' ? 'no slab below in this data' : undefined,
  ].filter((remark) => remark !== undefined);
}

/** Gaps of more than 100 km, and of more than three times the usual spacing, between neighbours along the front. */
function gapsAlong(front: readonly VolcanoAbove[]): VolcanoesAbove['gaps'] {
  const ordered = front.filter((one) => Number.isFinite(one.arcPosition)).sort((a, b) => a.arcPosition - b.arcPosition);
  const spaces = ordered.slice(1).map((one, i) => one.arcPosition - ordered[i].arcPosition);
  const usual = medianOf(spaces);
  return spaces.flatMap((length, i) =>
    length > 100 && (spaces.length < 3 || length > 3 * usual) ? [{ from: ordered[i].group, to: ordered[i + 1].group, length }] : [],
  );
}
