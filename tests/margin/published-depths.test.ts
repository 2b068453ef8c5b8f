import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { readSlabPoints, slabBelow, slabFromDepths, slabPoints, slabSupport, trenchLine } from 'wedgework';
import { dataFile, median, publishedVolcanoes } from './files';
import { place, wavySlab } from './synthetic';

/** Contours of the known slab every 20 km of depth, a point every 12 km along it. */
function contours(shift = 0) {
  const points = { longitude: [] as number[], latitude: [] as number[], depth: [] as number[] };
  for (let depth = 20; depth <= 240; depth += 20) {
    for (let along = -260; along <= 260; along += 12) {
      let [low, high] = [0, 500];
      for (let round = 0; round < 60; round++) {
        const middle = (low + high) / 2;
        if (wavySlab.depth(middle, along) < depth) low = middle;
        else high = middle;
      }
      const at = place(wavySlab, low, along);
      points.longitude.push(at.longitude + shift);
      points.latitude.push(at.latitude);
      points.depth.push(depth);
    }
  }
  return points;
}

describe('a surface through published depths', () => {
  test('gives the known slab back between its contours: depth within 0.5 km, dip within 2°', () => {
    const slab = slabFromDepths(slabPoints(contours()));
    for (let distance = 90; distance <= 300; distance += 17) {
      for (let along = -200; along <= 200; along += 37) {
        const at = place(wavySlab, distance, along);
        const { depth, dip, strike } = slab.at([at.longitude], [at.latitude]);
        expect(depth[0]).toBeGreaterThan(wavySlab.depth(distance, along) - 0.5);
        expect(depth[0]).toBeLessThan(wavySlab.depth(distance, along) + 0.5);
        const slope = (wavySlab.depth(distance + 0.5, along) - wavySlab.depth(distance - 0.5, along)) / 1;
        const acrossSlope = wavySlab.depth(distance, along + 0.5) - wavySlab.depth(distance, along - 0.5);
        expect(Math.abs(dip[0] - (Math.atan(Math.hypot(slope, acrossSlope)) * 180) / Math.PI)).toBeLessThan(2);
        // The slab dips west, to the right of a strike to the south.
        expect(Math.abs(strike[0] - 180)).toBeLessThan(10);
      }
    }
  });

  test('is exact for a plane, whatever the points', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.double({ min: -1, max: 1, noNaN: true }), fc.double({ min: -1, max: 1, noNaN: true })), {
          minLength: 12,
          maxLength: 60,
        }),
        (places) => {
          const longitude = [-1.2, 1.2, 1.2, -1.2, ...places.map(([x]) => x)];
          const latitude = [-1.2, -1.2, 1.2, 1.2, ...places.map(([, y]) => y)];
          // A plane of the projection through the middle of the region, where it is nearly the ground.
          const depth = longitude.map((x, i) => 100 + 30 * x - 20 * latitude[i]);
          const slab = slabFromDepths(slabPoints({ longitude, latitude, depth }), { reach: 400 });
          const z = slab.depthAt([0.1, -0.4], [0.2, 0.5]);
          expect(z[0]).toBeCloseTo(100 + 3 - 4, 0);
          expect(z[1]).toBeCloseTo(100 - 12 - 10, 0);
        },
      ),
      { numRuns: 40 },
    );
  });

  test('is the same across the dateline as elsewhere', () => {
    const here = slabFromDepths(slabPoints(contours()));
    const there = slabFromDepths(slabPoints(contours(309)));
    const mixed = contours(309);
    mixed.longitude = mixed.longitude.map((longitude, i) => (i % 2 === 0 ? longitude : longitude - 360));
    const across = slabFromDepths(slabPoints(mixed));
    for (const [longitude, latitude] of [
      [-129.5, -44.2],
      [-130.2, -45.1],
      [-131, -43.3],
    ]) {
      const z = here.depthAt([longitude], [latitude])[0];
      expect(there.depthAt([longitude + 309], [latitude])[0]).toBeCloseTo(z, 6);
      expect(across.depthAt([longitude + 309 - 360], [latitude])[0]).toBeCloseTo(z, 6);
    }
  });

  test('has no depth outside its outline and says where it bridges a gap', () => {
    const points = contours();
    const kept = points.depth.map((_, i) => i).filter((i) => points.depth[i] <= 40 || points.depth[i] >= 220);
    // The gap between the contours at 40 and 220 km is some 190 km wide.
    const few = slabPoints({
      longitude: kept.map((i) => points.longitude[i]),
      latitude: kept.map((i) => points.latitude[i]),
      depth: kept.map((i) => points.depth[i]),
    });
    const sparse = slabFromDepths(few, { reach: 120 });
    expect(sparse.at([-130], [-44.5]).support[0]).toBe(slabSupport.extrapolated);
    expect(slabFromDepths(few, { reach: 60 }).at([-130], [-44.5]).support[0]).toBe(slabSupport.none);
    expect(slabFromDepths(few, { reach: 250 }).at([-130], [-44.5]).support[0]).toBe(slabSupport.within);
    expect(sparse.at([-120], [-44.5]).support[0]).toBe(slabSupport.none);
    expect(sparse.at([-120], [-44.5]).depth[0]).toBeNaN();
    expect(sparse.at([NaN], [NaN]).depth[0]).toBeNaN();
  });

  test('measures from its shallowest contour, or from a trench that is given, whichever way it runs', async () => {
    const kuriles = slabFromDepths(await readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'kur' }));
    expect(kuriles.trench?.name).toBe('20 km contour');
    const points = { longitude: [153, 155.5], latitude: [48, 50.2] };
    const below = slabBelow(kuriles, points);
    expect(below.trenchDistance.every((d) => d > 60 && d < 220)).toBe(true);
    expect(below.arcPosition[1]).toBeLessThan(below.arcPosition[0]); // strike runs south-west, with the slab dipping to its right
    const there = slabBelow(kuriles, points, { trench: trenchLine([152, 160], [44, 52]) });
    const back = slabBelow(kuriles, points, { trench: trenchLine([160, 152], [52, 44]) });
    expect(there.trenchDistance[0]).toBeGreaterThan(below.trenchDistance[0]);
    expect(back.trenchDistance[0]).toBeCloseTo(there.trenchDistance[0], 6);
  });

  test('refuses what makes no surface, saying why', () => {
    expect(() => slabFromDepths(slabPoints({ longitude: [1, 2], latitude: [1, 2], depth: [10, 20] }))).toThrow(/at least three depths/);
    expect(() => slabFromDepths(slabPoints({ longitude: [1, 2, 3], latitude: [0, 0, 0], depth: [10, 20, 30] }))).toThrow(/one line/);
    expect(() => slabFromDepths({} as never)).toThrow(/readSlabPoints/);
    expect(() => slabFromDepths(slabPoints(contours()), { reach: -1 })).toThrow(/reach must be a positive number of km/);
    expect(() => slabPoints({ longitude: [1], latitude: [99], depth: [1] })).toThrow(/latitude 99 of point 0/);
    expect(() => slabPoints({ longitude: [1, 2], latitude: [1, 2], depth: [1] })).toThrow(/1 depths for 2 points/);
  });
});

describe('slab depths below volcanoes against a published table', () => {
  // Published depth: top of the seismic zone below each volcano, picked by hand on sections (Syracuse & Abers 2006, table S2a). Surface: Slab2
  // contours (Hayes et al. 2018). Two readings of the same slabs, of different years and data; their difference is reported here arc by arc.
  const volcanoes = publishedVolcanoes().filter(({ depth }) => Number.isFinite(depth));
  const arcs: readonly (readonly [string, RegExp, number, number])[] = [
    // slab, arcs, median difference (km) as found, largest distance of one volcano from that median (km)
    ['alu', /Aleut/, 7, 25],
    ['kur', /Kurile|Kamchatka/, -7, 35],
    ['izu', /^Izu/, -15, 25],
  ];
  test.each(arcs)('%s: median difference as found', async (slab, arc, expected, most) => {
    const surface = slabFromDepths(await readSlabPoints(dataFile('slab-depth-contours.csv'), { slab }));
    const here = volcanoes.filter((volcano) => arc.test(volcano.arc));
    const below = slabBelow(surface, { longitude: here.map(({ longitude }) => longitude), latitude: here.map(({ latitude }) => latitude) });
    const differences = here.map(({ depth }, i) => below.depth[i] - depth);
    expect(differences.every(Number.isFinite)).toBe(true);
    expect(Math.abs(median(differences) - expected)).toBeLessThan(1.5);
    expect(Math.max(...differences.map((d) => Math.abs(d - expected)))).toBeLessThan(most);
    // The stated 1σ of 10 km for the surface explains the scatter about the median: two thirds or more lie within it.
    expect(differences.filter((d) => Math.abs(d - median(differences)) < 10).length / differences.length).toBeGreaterThan(0.66);
  });

  test('the outliers are steep slabs: Vanuatu, where 15 km across the surface is 40 km of depth', async () => {
    const surface = slabFromDepths(await readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'van' }));
    const here = volcanoes.filter(({ arc }) => /Vanuatu/.test(arc));
    const below = slabBelow(surface, { longitude: here.map(({ longitude }) => longitude), latitude: here.map(({ latitude }) => latitude) });
    const differences = here.map(({ depth }, i) => below.depth[i] - depth);
    // All published dips there are 65° or more; Slab2 reads 10–30° less, and so 20–110 km shallower below the same volcano.
    expect(Math.min(...here.map(({ dip }) => dip))).toBeGreaterThanOrEqual(65);
    expect(median(here.map(({ dip }, i) => below.dip[i] - dip))).toBeLessThan(-8);
    expect(median(differences)).toBeLessThan(-40);
    // Across the slab (× cos dip) the same differences are a third of that: the two models lie side by side, not one above the other.
    expect(Math.abs(median(differences.map((d, i) => d * Math.cos((here[i].dip * Math.PI) / 180))))).toBeLessThan(30);
  });
});
