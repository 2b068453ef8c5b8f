import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { column, plateVelocity, pointOut, rateInMillimetres, slabKinematics, suiteOf, withKinematics } from 'wedgework';
import { publishedVolcanoes } from './files';

describe('every volcano of a published table', () => {
  // Syracuse & Abers 2006, table S2a: convergence, obliquity, descent rate and thermal parameter, printed to 0.1 with angles to 1°.
  const volcanoes = publishedVolcanoes().filter(({ dip, descent }) => Number.isFinite(dip) && Number.isFinite(descent));
  const degree = Math.PI / 180;

  test('there are 258 with a dip', () => {
    expect(volcanoes).toHaveLength(258);
  });

  test.each(volcanoes.map((volcano) => [`${volcano.arc} ${volcano.name}`, volcano] as const))('%s', (_, v) => {
    // The table gives strike without a side; the slab dips to the right of the one of its two ends that makes convergence head-on.
    const sideways = (strike: number) => Math.cos((v.azimuth - strike - 90) * degree) < 0;
    const strike = sideways(v.strike) ? v.strike + 180 : v.strike;
    const found = slabKinematics({ rate: { value: v.total, unit: 'km/Ma' }, azimuth: v.azimuth, strike, dip: v.dip });
    // Rounding of azimuth and strike (half a degree each) and of the rates (0.05).
    const oblique = Math.abs(Math.sin(found.obliquity * degree)) * degree + 0.5 * degree ** 2;
    expect(Math.abs(found.normal - v.normal)).toBeLessThanOrEqual(v.total * oblique + 0.1);
    // The rest from the printed trench-normal rate, so that one rounding does not hide in another.
    const straight = slabKinematics({
      rate: { value: v.normal, unit: 'km/Ma' },
      azimuth: strike + 90,
      strike,
      dip: v.dip,
      age: Number.isFinite(v.age) ? v.age : undefined,
    });
    const dipRounding = v.normal * Math.cos(v.dip * degree) * 0.5 * degree + 0.05 + 1e-6;
    expect(Math.abs(straight.descent - v.descent)).toBeLessThanOrEqual(dipRounding + 0.05);
    if (Number.isNaN(v.phi)) return; // 44 rows have no plate age
    expect(Math.abs(straight.thermalParameter / 100 - v.phi)).toBeLessThanOrEqual((dipRounding * v.age + 0.05 * v.descent) / 100 + 0.1);
  });
});

describe('rates and motion', () => {
  test('units: 8.1 cm/yr is 81 mm/yr is 81 km/Ma', () => {
    expect(rateInMillimetres({ value: 8.1, unit: 'cm/yr' })).toBeCloseTo(81, 12);
    expect(rateInMillimetres({ value: 81, unit: 'mm/yr' })).toBe(81);
    expect(rateInMillimetres({ value: 81, unit: 'km/Ma' })).toBe(81);
    expect(() => rateInMillimetres({ value: 8, unit: 'm/yr' as never })).toThrow(/mm\/yr, cm\/yr, km\/Ma/);
    expect(() => rateInMillimetres(8 as never)).toThrow(/A rate is \{ value, unit \}/);
    expect(() => rateInMillimetres({ value: -8, unit: 'cm/yr' })).toThrow(/zero or more/);
  });

  test('a rotation of 1°/Ma moves a place 90° from its pole by 111.2 km/Ma, and the pole not at all', () => {
    // π/180 × 6371.0088 km (mean radius, IUGG)
    const equator = plateVelocity({ latitude: 90, longitude: 0, degreesPerMa: 1 }, 30, 0);
    expect(equator.rate).toBeCloseTo(111.195, 3);
    expect(equator.azimuth).toBeCloseTo(90, 9);
    expect(plateVelocity({ latitude: 40, longitude: 20, degreesPerMa: 1 }, 20, 40).rate).toBeCloseTo(0, 9);
    // Rate is ω·R·sin(distance from the pole) (spherical trigonometry)
    fc.assert(
      fc.property(
        fc.double({ min: -89, max: 89, noNaN: true }),
        fc.double({ min: -180, max: 180, noNaN: true }),
        fc.double({ min: -89, max: 89, noNaN: true }),
        (pole, longitude, latitude) => {
          const cosine =
            Math.sin((pole * Math.PI) / 180) * Math.sin((latitude * Math.PI) / 180) +
            Math.cos((pole * Math.PI) / 180) * Math.cos((latitude * Math.PI) / 180) * Math.cos((longitude * Math.PI) / 180);
          expect(plateVelocity({ latitude: pole, longitude: 0, degreesPerMa: 0.7 }, longitude, latitude).rate).toBeCloseTo(
            0.7 * 111.19508 * Math.sqrt(Math.max(0, 1 - cosine * cosine)),
            3,
          );
        },
      ),
    );
  });

  test('the parts make the whole, and obliquity has a side', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1, max: 120, noNaN: true }),
        fc.double({ min: -180, max: 360, noNaN: true }),
        fc.double({ min: 0, max: 360, noNaN: true }),
        (value, azimuth, strike) => {
          const { normal, parallel, obliquity } = slabKinematics({ rate: { value, unit: 'mm/yr' }, azimuth, strike, dip: 40, age: 50 });
          expect(Math.hypot(normal, parallel)).toBeCloseTo(value, 9);
          expect(Math.abs(obliquity)).toBeLessThanOrEqual(180);
        },
      ),
    );
    expect(slabKinematics({ rate: { value: 60, unit: 'mm/yr' }, azimuth: 300, strike: 180, dip: 40, age: 50 }).obliquity).toBeCloseTo(30, 9);
  });

  test('unusual values are pointed out, never refused (common practice)', () => {
    const odd = slabKinematics({ rate: { value: 620, unit: 'cm/yr' }, azimuth: 90, strike: 180, dip: 75, age: 2 });
    expect(odd.notes.join('\n')).toMatch(/convergence rate 6200 mm\/yr is above the usual 20–80/);
    expect(odd.notes.join('\n')).toMatch(/mm\/yr given as cm\/yr/);
    expect(odd.notes.join('\n')).toMatch(/a steep slab/);
    expect(odd.notes.join('\n')).toMatch(/moves away from the arc/);
    expect(slabKinematics({ rate: { value: 6, unit: 'cm/yr' }, azimuth: 270, strike: 180, dip: 40, age: 50 }).notes).toEqual([]);
    expect(pointOut('slab-dip', 12)).toMatch(/a flat slab/);
    expect(pointOut('slab-dip', NaN)).toBeUndefined();
    expect(() => pointOut('slab-colour', 1)).toThrow(/Known: convergence-rate/);
  });

  test('joined to a suite: from a rate or a pole, with one age or a column of ages', () => {
    const suite = suiteOf({
      columns: [
        column({ symbol: 'SlabDip', values: [30, 60, NaN], unit: '°' }),
        column({ symbol: 'SlabStrike', values: [180, 180, 180], unit: '°' }),
        column({ symbol: 'PlateAge', values: [40, 80, 80], unit: 'Ma' }),
        column({ symbol: 'latitude', values: [-44, -44, -44] }),
        column({ symbol: 'longitude', values: [-130, -130, -130] }),
      ],
    });
    const done = withKinematics(suite, { motion: { rate: { value: 6, unit: 'cm/yr' }, azimuth: 270 }, age: 'PlateAge' });
    // 60 × sin 30° = 30 km/Ma; × 40 Ma = 1200 km
    expect(done.values('DescentRate')[0]).toBeCloseTo(30, 9);
    expect(done.values('ThermalParameter')[0]).toBeCloseTo(1200, 9);
    expect(done.values('ThermalParameter')[2]).toBeNaN();
    const turned = withKinematics(suite, { motion: { pole: { latitude: 90, longitude: 0, degreesPerMa: -1 } }, age: 40 });
    expect(turned.values('ConvergenceNormal')[0]).toBeCloseTo(111.195 * Math.cos((44 * Math.PI) / 180), 2);
    expect(() => withKinematics(suiteOf({ columns: [] }), { motion: { rate: { value: 6, unit: 'cm/yr' }, azimuth: 270 }, age: 1 })).toThrow(
      /slabBelow/,
    );
    expect(() => withKinematics(suite, { motion: {} as never, age: 1 })).toThrow(/motion must be/);
    expect(() => withKinematics(suite, { motion: { rate: { value: 6, unit: 'cm/yr' }, azimuth: 270 }, age: 'Age' })).toThrow(/no column "Age"/);
  });
});
