import { showAs, type Showable } from '../display';
import { derivedColumn, step, type Step, type Suite } from '../suite';
import { wrapAzimuth } from './geodesy';
import { pointOut } from './plausibility';
import { coordinatesOf } from './slab-below';

/** Units of a plate's speed. 1 mm/yr is exactly 1 km/Ma. */
export type RateUnit = 'mm/yr' | 'cm/yr' | 'km/Ma';

/** A speed with its unit. */
export interface Rate {
  readonly value: number;
  readonly unit: RateUnit;
}

/** Motion of the lower plate against the upper: a rate and the azimuth it moves to, or a rotation about a pole (°/Ma, right-handed). */
export type PlateMotion =
  | { readonly rate: Rate; readonly azimuth: number }
  | { readonly pole: { readonly latitude: number; readonly longitude: number; readonly degreesPerMa: number } };

const perYear: Readonly<Record<RateUnit, number>> = { 'mm/yr': 1, 'cm/yr': 10, 'km/Ma': 1 };
/** Mean radius of the Earth for plate rotations, km (IUGG). */
const meanRadius = 6371.0088;
const radians = Math.PI / 180;

/**
 * A rate in mm/yr, which is km/Ma.
 *
 * @param rate `{ value, unit }` with unit `mm/yr`, `cm/yr` or `km/Ma`
 * @throws RangeError for another unit or a value that is not a number ≥ 0
 * @example rateInMillimetres({ value: 8.1, unit: 'cm/yr' }) // 81
 */
export function rateInMillimetres(rate: Rate): number {
  if (typeof rate !== 'object' || rate === null || !Object.hasOwn(perYear, rate.unit)) {
    throw new RangeError(`A rate is { value, unit } with unit ${Object.keys(perYear).join(', ')}; not ${JSON.stringify(rate)}.`);
  }
  if (!(Number.isFinite(rate.value) && rate.value >= 0))
    throw new RangeError(`A rate must be a number of ${rate.unit} of zero or more, not ${String(rate.value)}.`);
  return rate.value * perYear[rate.unit];
}

/**
 * Velocity of a plate at a place, from its rotation about a pole, on a sphere of the Earth's mean radius.
 *
 * @param pole `latitude`, `longitude` (degrees), `degreesPerMa` (positive anticlockwise seen from above the pole)
 * @returns `rate` (mm/yr), `azimuth` (degrees, 0–360), `east` and `north` (mm/yr)
 * @throws RangeError for a pole outside the globe
 */
export function plateVelocity(
  pole: { readonly latitude: number; readonly longitude: number; readonly degreesPerMa: number },
  longitude: number,
  latitude: number,
): { readonly rate: number; readonly azimuth: number; readonly east: number; readonly north: number } {
  if (!(Math.abs(pole?.latitude) <= 90) || !Number.isFinite(pole.longitude) || !Number.isFinite(pole.degreesPerMa)) {
    throw new RangeError('plateVelocity: a pole needs latitude (-90 to 90), longitude and degreesPerMa, all numbers.');
  }
  const turn = pole.degreesPerMa * radians * meanRadius;
  const p = pole.latitude * radians;
  const f = latitude * radians;
  const d = (longitude - pole.longitude) * radians;
  const east = turn * (Math.sin(p) * Math.cos(f) - Math.cos(p) * Math.sin(f) * Math.cos(d));
  const north = turn * Math.cos(p) * Math.sin(d);
  return { rate: Math.hypot(east, north), azimuth: wrapAzimuth(Math.atan2(east, north) / radians), east, north };
}

/** Kinematics of a slab at one place. */
export interface SlabKinematics {
  /** Rate of convergence, mm/yr (= km/Ma). */
  readonly convergence: number;
  /** Angle of convergence from straight down dip, degrees (-180 to 180, clockwise positive): 0 is head-on. */
  readonly obliquity: number;
  /** Parts across and along the trench, mm/yr. */
  readonly normal: number;
  readonly parallel: number;
  /** Rate at which the slab goes down: normal × sin(dip), km/Ma. */
  readonly descent: number;
  /** Thermal parameter Φ = age × normal × sin(dip), km. */
  readonly thermalParameter: number;
  readonly notes: readonly string[];
  readonly lineage: readonly Step[];
}

/**
 * Kinematics of a slab from plate motion, its attitude and its age: obliquity, descent rate, thermal parameter. The trench-normal part of
 * convergence is what carries the slab down (Syracuse & Abers 2006 tabulate it so); Φ is in km, and is often printed in hundreds of km.
 *
 * @param given `rate` ({ value, unit }), `azimuth` (degrees, direction in which the lower plate moves against the upper), `strike` (degrees, the slab
 *   dipping to its right), `dip` (degrees), `age` (Ma, of the plate at the trench; without it there is no Φ)
 * @returns mm/yr, degrees, km/Ma and km; `notes` point out what is unusual
 * @throws RangeError for a unit that is not known or values that are not possible
 * @source Kirby et al. 1991 (thermal parameter); Syracuse & Abers 2006
 * @example slabKinematics({ rate: { value: 62.8, unit: 'km/Ma' }, azimuth: 331, strike: 241, dip: 45, age: 54.3 }).thermalParameter // 2411 km
 */
export function slabKinematics(given: {
  readonly rate: Rate;
  readonly azimuth: number;
  readonly strike: number;
  readonly dip: number;
  readonly age?: number;
}): SlabKinematics & Showable {
  const convergence = rateInMillimetres(given?.rate);
  const { azimuth, strike, dip, age = NaN } = given;
  for (const [name, value, from, to] of [
    ['azimuth', azimuth, -720, 720],
    ['strike', strike, -720, 720],
    ['dip', dip, 0, 90],
    ['age', age, 0, 4000],
  ] as const) {
    if (name === 'age' && given.age === undefined) continue;
    if (!(value >= from && value <= to))
      throw new RangeError(
        `slabKinematics: ${name} must be a number from ${from} to ${to}${name === 'age' ? ' Ma' : ' degrees'}, not ${String(value)}.`,
      );
  }
  const obliquity = wrapAngle(azimuth - (strike + 90));
  const normal = convergence * Math.cos(obliquity * radians);
  const parallel = convergence * Math.sin(obliquity * radians);
  const descent = normal * Math.sin(dip * radians);
  const notes = [pointOut('convergence-rate', convergence), pointOut('slab-dip', dip), pointOut('slab-age', age)].filter(
    (note) => note !== undefined,
  );
  if (given.age === undefined) notes.push('No plate age, so no thermal parameter.');
  if (convergence > 250) notes.push('No plates are known to converge so fast: check that the unit is not mm/yr given as cm/yr.');
  if (Math.abs(obliquity) > 90)
    notes.push(
      `The lower plate moves away from the arc (${obliquity.toFixed(0)}° from down dip): check the azimuth, and that the slab dips to the ` +
        'right of the strike.',
    );
  else if (Math.abs(obliquity) > 45) notes.push(`Convergence is more oblique than 45° (${obliquity.toFixed(0)}°).`);
  const result: SlabKinematics = {
    convergence,
    obliquity,
    normal,
    parallel,
    descent,
    thermalParameter: age * descent,
    notes,
    lineage: [
      step(
        'slabKinematics',
        { rate: given.rate.value, unit: given.rate.unit, azimuth, strike, dip, age: given.age ?? null },
        { sources: ['kirby_1991', 'syracuse_abers_2006'], tables: ['plausible-ranges.json'] },
      ),
    ],
  };
  return showAs(result, () => ({
    title: 'Kinematics of the slab',
    columns: ['convergence (mm/yr)', 'obliquity (°)', 'across (mm/yr)', 'along (mm/yr)', 'descent (km/Ma)', 'thermal parameter Φ (km)'],
    rows: [[convergence, obliquity, normal, parallel, descent, result.thermalParameter].map((value) => Number(value.toPrecision(5)))],
    notes,
  }));
}

function wrapAngle(angle: number): number {
  const turned = wrapAzimuth(angle);
  return turned > 180 ? turned - 360 : turned;
}

/**
 * Joins kinematics to a suite that `slabBelow` has placed: `ConvergenceNormal` (mm/yr across the slab's strike), `Obliquity` (°),
 * `DescentRate` (km/Ma) and `ThermalParameter` (km), from the slab's own dip and strike below each sample.
 *
 * @param suite n samples with `SlabDip` and `SlabStrike`
 * @param given `motion`: `{ rate, azimuth }` or `{ pole }` (lower plate against upper); `age`: Ma, a number for all samples or the symbol of a
 *   column in Ma; `strike`: one strike for all in place of the slab's own below each sample
 * @returns the suite with the four columns; the step in its lineage holds what is unusual
 * @throws RangeError for a suite without the slab below, or for units and values that are not possible
 * @example withKinematics(placed, { motion: { rate: { value: 7.2, unit: 'cm/yr' }, azimuth: 268 }, age: 45 })
 */
export function withKinematics(
  suite: Suite,
  given: { readonly motion: PlateMotion; readonly age: number | string; readonly strike?: number },
): Suite {
  for (const symbol of ['SlabDip', 'SlabStrike']) {
    if (!suite.has(symbol)) throw new RangeError(`withKinematics: the suite has no column "${symbol}". Join the slab first: slabBelow(slab, suite).`);
  }
  const { motion, age } = given;
  const ages = typeof age === 'string' ? suite.values(age) : undefined;
  if (ages === undefined && !(typeof age === 'number' && age >= 0))
    throw new RangeError(`withKinematics: age must be a number of Ma or the symbol of a column, not ${String(age)}.`);
  const fixed = motion !== undefined && 'rate' in motion ? { rate: rateInMillimetres(motion.rate), azimuth: motion.azimuth } : undefined;
  if (fixed === undefined && !(motion !== undefined && 'pole' in motion))
    throw new RangeError('withKinematics: motion must be { rate, azimuth } or { pole: { latitude, longitude, degreesPerMa } }.');
  if (fixed !== undefined && !Number.isFinite(fixed.azimuth))
    throw new RangeError(`withKinematics: azimuth must be a number of degrees, not ${String(fixed.azimuth)}.`);
  const dip = suite.values('SlabDip');
  const strikes = suite.values('SlabStrike');
  const place = fixed === undefined ? coordinatesOf(suite, 'withKinematics') : undefined;
  const size = suite.size;
  const [normal, obliquity, descent, phi] = [0, 1, 2, 3].map(() => new Float64Array(size).fill(NaN));
  for (let i = 0; i < size; i++) {
    const strike = given.strike ?? strikes[i];
    if (Number.isNaN(dip[i]) || Number.isNaN(strike)) continue;
    const { rate, azimuth } =
      fixed ??
      plateVelocity(
        (motion as { pole: { latitude: number; longitude: number; degreesPerMa: number } }).pole,
        place!.longitude[i],
        place!.latitude[i],
      );
    obliquity[i] = wrapAngle(azimuth - (strike + 90));
    normal[i] = rate * Math.cos(obliquity[i] * radians);
    descent[i] = normal[i] * Math.sin(dip[i] * radians);
    phi[i] = descent[i] * (ages === undefined ? (age as number) : ages[i]);
  }
  const middle = (values: Float64Array) => values.filter(Number.isFinite).sort()[Math.floor(values.filter(Number.isFinite).length / 2)] ?? NaN;
  const notes = [
    pointOut('convergence-rate', fixed?.rate ?? middle(normal)),
    pointOut('slab-dip', middle(dip)),
    pointOut('slab-age', ages === undefined ? (age as number) : middle(ages)),
    Math.abs(middle(obliquity)) > 90 ? 'the lower plate moves away from the arc: check the azimuth' : undefined,
  ].filter((note) => note !== undefined);
  return suite.with(
    [
      derivedColumn('ConvergenceNormal', normal, 'mm/yr'),
      derivedColumn('Obliquity', obliquity, '°'),
      derivedColumn('DescentRate', descent, 'km/Ma'),
      derivedColumn('ThermalParameter', phi, 'km'),
    ],
    step(
      'withKinematics',
      { ...(fixed ?? { pole: JSON.stringify((motion as { pole: unknown }).pole) }), age, strike: given.strike ?? null, notes },
      {
        sources: ['kirby_1991', 'syracuse_abers_2006'],
        tables: ['plausible-ranges.json'],
        says:
          'Descent rate and thermal parameter were taken from ' +
          `${fixed === undefined ? 'plate rotation about a pole' : `convergence of ${fixed.rate} mm/yr towards ${fixed.azimuth}°`}, the ` +
          "slab's dip and strike below each sample, and " +
          `${typeof age === 'number' ? `a plate age of ${age} Ma` : `the plate ages of column ${age}`}.`,
      },
    ),
  );
}
