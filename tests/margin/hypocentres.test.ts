import { beforeAll, describe, expect, test } from 'vitest';
import {
  eventKind,
  hypocentresOf,
  readHypocentres,
  readSlabPoints,
  slabBelow,
  slabFromDepths,
  slabFromHypocentres,
  slabSupport,
  trenchLine,
} from 'wedgework';
import { dataFile, median } from './files';
import { place, syntheticEvents, wavySlab } from './synthetic';

/** Errors of a fitted surface on a grid over the known slab, in a range of true depth. */
function errors(slab: ReturnType<typeof slabFromHypocentres>, from: number, to: number) {
  const result = { error: [] as number[], sigma: [] as number[], dip: [] as number[] };
  for (let distance = 50; distance <= 300; distance += 15) {
    for (let along = -220; along <= 220; along += 20) {
      const depth = wavySlab.depth(distance, along);
      if (depth < from || depth > to) continue;
      const at = place(wavySlab, distance, along);
      const below = slab.at([at.longitude], [at.latitude]);
      result.error.push(below.depth[0] - depth);
      result.sigma.push(below.sigma[0]);
      result.dip.push(below.dip[0] - (Math.atan(wavySlab.depth(distance + 0.5, along) - wavySlab.depth(distance - 0.5, along)) * 180) / Math.PI);
    }
  }
  return result;
}
const rms = (values: readonly number[]) => Math.sqrt(values.reduce((sum, v) => sum + v * v, 0) / values.length);

describe('a known slab with 10 % crustal noise', () => {
  const given = syntheticEvents(wavySlab, { seed: 1, count: 600, crust: 0.1, noise: 5 });
  const slab = slabFromHypocentres(hypocentresOf(given), { systematic: 0.001 });

  test('is recovered to 2 km rms in depth between 40 and 250 km, and 2° in dip', () => {
    const found = errors(slab, 40, 250);
    expect(rms(found.error)).toBeLessThan(2);
    expect(Math.abs(median(found.error))).toBeLessThan(0.7);
    expect(median(found.dip.map(Math.abs))).toBeLessThan(2);
  });

  test('its 1σ is honest: 80 % or more of the true depths lie within 2σ', () => {
    const found = errors(slab, 40, 250);
    expect(found.error.filter((error, i) => Math.abs(error) < 2 * found.sigma[i]).length / found.error.length).toBeGreaterThan(0.8);
  });

  test('tells the crust from the slab', () => {
    // 600 events, 10 % drawn as crust: within three binomial deviations of 60, less those that lie on the slab by chance.
    expect(slab.counts.crust).toBeGreaterThan(35);
    expect(slab.counts.crust).toBeLessThan(82);
    expect(slab.counts.slab + slab.counts.crust + slab.counts.lowerPlane + slab.counts.neither).toBe(600);
  });

  test('says where it extrapolates, and gives nothing far away', () => {
    const near = place(wavySlab, 150, 290);
    const far = place(wavySlab, 150, 900);
    expect(slab.at([near.longitude], [near.latitude]).support[0]).not.toBe(slabSupport.within);
    expect(slab.at([far.longitude], [far.latitude]).support[0]).toBe(slabSupport.none);
    expect(slab.depthAt([far.longitude], [far.latitude])[0]).toBeNaN();
  });
});

describe('against harder seismicity', () => {
  test('half of all events in the crust: still within 2 km rms below 40 km', () => {
    const slab = slabFromHypocentres(hypocentresOf(syntheticEvents(wavySlab, { seed: 3, count: 1500, crust: 0.5, noise: 5 })));
    expect(rms(errors(slab, 40, 250).error)).toBeLessThan(2);
  });

  test.each([11, 12, 13])('a double plane 28 km apart: the surface follows the upper plane and finds the separation (seed %i)', (seed) => {
    const slab = slabFromHypocentres(
      hypocentresOf(syntheticEvents(wavySlab, { seed, count: 1500, crust: 0.1, noise: 4, lower: { share: 0.4, separation: 28 } })),
    );
    expect(slab.planeSeparation).toBeGreaterThan(25);
    expect(slab.planeSeparation).toBeLessThan(31);
    expect(rms(errors(slab, 40, 250).error)).toBeLessThan(2.5);
    expect(slab.counts.lowerPlane).toBeGreaterThan(400);
  });

  test('one plane is not split', () => {
    for (const seed of [21, 22])
      expect(
        slabFromHypocentres(hypocentresOf(syntheticEvents(wavySlab, { seed, count: 500, crust: 0.1, noise: 6 }))).planeSeparation,
      ).toBeUndefined();
  });

  test('a trench line holds the shallow end and gives distances', () => {
    const trench = trenchLine([-128, -128], [-42, -47]);
    const slab = slabFromHypocentres(hypocentresOf(syntheticEvents(wavySlab, { seed: 5, count: 400, crust: 0.1, noise: 5 })), { trench });
    const at = place(wavySlab, 60, 0);
    const below = slabBelow(slab, { longitude: [at.longitude], latitude: [at.latitude] });
    expect(Math.abs(below.depth[0] - wavySlab.depth(60, 0))).toBeLessThan(4);
    expect(below.trenchDistance[0]).toBeCloseTo(60, 0);
  });

  test('across the dateline as elsewhere, with an area that crosses it', () => {
    const given = syntheticEvents(wavySlab, { seed: 8, count: 400, crust: 0.1, noise: 5 });
    const moved = { ...given, longitude: given.longitude.map((longitude) => (longitude + 309 > 180 ? longitude - 51 : longitude + 309)) };
    const here = slabFromHypocentres(hypocentresOf(given));
    const there = slabFromHypocentres(hypocentresOf(moved), { area: { west: 175, east: -178, south: -48, north: -41 } });
    expect(there.depthAt([-130 + 309], [-44.5])[0]).toBeCloseTo(here.depthAt([-130], [-44.5])[0], 3);
    expect(there.extent.east - there.extent.west).toBeLessThan(6);
  });

  test('events that the catalogue calls uncertain weigh less', () => {
    const given = syntheticEvents(wavySlab, { seed: 9, count: 500, crust: 0, noise: 3 });
    // Every third event 12 km too deep, and its own error says so.
    const depth = given.depth.map((z, i) => (i % 3 === 0 ? z + 12 : z));
    const said = slabFromHypocentres(hypocentresOf({ ...given, depth, depthError: depth.map((_, i) => (i % 3 === 0 ? 25 : 2)) }));
    const unsaid = slabFromHypocentres(hypocentresOf({ ...given, depth }));
    expect(Math.abs(median(errors(said, 60, 200).error))).toBeLessThan(Math.abs(median(errors(unsaid, 60, 200).error)));
  });

  test('the same events give the same surface, in any order', () => {
    const given = syntheticEvents(wavySlab, { seed: 6, count: 400, crust: 0.1, noise: 5 });
    const order = given.depth.map((_, i) => i).reverse();
    const turned = {
      longitude: order.map((i) => given.longitude[i]),
      latitude: order.map((i) => given.latitude[i]),
      depth: order.map((i) => given.depth[i]),
    };
    const a = slabFromHypocentres(hypocentresOf(given));
    const b = slabFromHypocentres(hypocentresOf(turned));
    expect(slabFromHypocentres(hypocentresOf(given)).depthAt([-130], [-44.5])[0]).toBe(a.depthAt([-130], [-44.5])[0]);
    expect(b.depthAt([-130], [-44.5])[0]).toBeCloseTo(a.depthAt([-130], [-44.5])[0], 3);
  });
});

describe('refusals', () => {
  test('too few events, and what to do', () => {
    const few = syntheticEvents(wavySlab, { seed: 7, count: 18, crust: 0, noise: 5 });
    expect(() => slabFromHypocentres(hypocentresOf(few))).toThrow(
      /only \d+ of 18 events are deeper than 50 km.*Widen the area, use a longer catalogue, or take published depths/s,
    );
    const crustOnly = syntheticEvents(wavySlab, { seed: 8, count: 500, crust: 1, noise: 5 });
    expect(() => slabFromHypocentres(hypocentresOf(crustOnly))).toThrow(/only 0 of 500/);
  });
  test('deep events on one line', () => {
    const along = Array.from({ length: 80 }, (_, i) => -46 + i * 0.03);
    expect(() => slabFromHypocentres(hypocentresOf({ longitude: along.map(() => -130), latitude: along, depth: along.map(() => 100) }))).toThrow(
      /along a line/,
    );
  });
  test('the whole world at once, an area without events, bad options', () => {
    const world = { longitude: [] as number[], latitude: [] as number[], depth: [] as number[] };
    for (let i = 0; i < 400; i++) {
      world.longitude.push(-180 + i * 0.9);
      world.latitude.push(((i * 37) % 120) - 60);
      world.depth.push(60 + (i % 100));
    }
    const events = hypocentresOf(world);
    expect(() => slabFromHypocentres(events)).toThrow(/more than one slab.*area/s);
    expect(() => slabFromHypocentres(events, { area: { west: 0, east: 1, south: 88, north: 89 } })).toThrow(/no event lies in the area/);
    expect(() => slabFromHypocentres(events, { area: { west: 0, east: 1, south: 3, north: 2 } })).toThrow(/south below north/);
    expect(() => slabFromHypocentres(events, { follow: 'bottom' as never })).toThrow(/"middle" or "top", not "bottom"/);
    expect(() => slabFromHypocentres({} as never)).toThrow(/readHypocentres/);
  });
});

describe('one month of a real catalogue against published contours', () => {
  // ANSS ComCat, December 2015, southern Alaska, where the month is dense; contours: Slab2 (Hayes et al. 2018), a model of the slab's top.
  let difference: { middle: number[]; top: number[] };
  beforeAll(async () => {
    const events = await readHypocentres(dataFile('hypocentres-2015-12.csv'));
    const published = slabFromDepths(await readSlabPoints(dataFile('slab-depth-contours.csv'), { slab: 'alu' }));
    const area = { west: -156, east: -147, south: 58.5, north: 64 };
    difference = { middle: [], top: [] };
    for (const follow of ['middle', 'top'] as const) {
      const fitted = slabFromHypocentres(events, { area, follow });
      expect(fitted.counts.slab).toBeGreaterThan(500);
      for (let longitude = area.west; longitude <= area.east; longitude += 0.5) {
        for (let latitude = area.south; latitude <= area.north; latitude += 0.5) {
          const a = fitted.at([longitude], [latitude]);
          const b = published.at([longitude], [latitude]);
          if (a.support[0] === slabSupport.within && b.support[0] === slabSupport.within && b.depth[0] > 40 && b.depth[0] < 110)
            difference[follow].push(a.depth[0] - b.depth[0]);
        }
      }
    }
  });
  test('the middle of the seismicity lies some 20 km below the published top of the slab', () => {
    // So do the events themselves: of those deeper than 45 km here, the median lies 15–21 km below the contours and hardly any above them.
    expect(difference.middle.length).toBeGreaterThan(30);
    expect(median(difference.middle)).toBeGreaterThan(12);
    expect(median(difference.middle)).toBeLessThan(25);
  });
  test('its top lies within 15 km of it', () => {
    expect(Math.abs(median(difference.top))).toBeLessThan(15);
    expect(Math.abs(median(difference.top))).toBeLessThan(Math.abs(median(difference.middle)));
  });
});

test('kinds of event are numbers with names', () => {
  expect(eventKind).toEqual({ slab: 0, lowerPlane: 1, crust: 2, other: 3 });
});
