// Speed of the slab below an arc. Answers are checked first; the exit code is 1 only when they are wrong.
import { createRequire } from 'node:module';
import { fileURLToPath } from 'node:url';

const ww = createRequire(import.meta.url)(fileURLToPath(new URL('../../kernel-lib/dist/index.js', import.meta.url)));
let state = 20260701;
/** Uniform in [0, 1): mulberry32. */
function uniform() {
  state = (state + 0x6d2b79f5) >>> 0;
  let t = Math.imul(state ^ (state >>> 15), 1 | state);
  t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
  return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
}
const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
let wrong = false;
const check = (what, good) => {
  if (good) return;
  wrong = true;
  console.log(`margin: WRONG: ${what}`);
};

// A slab that dips west from 128° W: depth grows with distance, kilometres by degrees of longitude at 44.5° S.
const kmPerDegree = 79.4;
const known = (longitude, latitude) => {
  const d = (-128 - longitude) * kmPerDegree;
  return 7 + 0.12 * d + 0.0019 * d * d + 5 * Math.sin(latitude * 1.5);
};

// 50,000 points on 25 depth contours.
const contours = { longitude: [], latitude: [], depth: [] };
for (let depth = 10; depth <= 250; depth += 10) {
  for (let k = 0; k < 2000; k++) {
    const latitude = -54 + (20 * k) / 1999;
    let [low, high] = [-138, -128];
    for (let round = 0; round < 40; round++) {
      const middle = (low + high) / 2;
      if (known(middle, latitude) > depth) low = middle;
      else high = middle;
    }
    contours.longitude.push(low);
    contours.latitude.push(latitude);
    contours.depth.push(depth);
  }
}
const points = ww.slabPoints(contours);
const lons = Float64Array.from({ length: 10_000 }, () => -131 + 2 * uniform());
const lats = Float64Array.from({ length: 10_000 }, () => -53 + 18 * uniform());
for (let warm = 0; warm < 2; warm++) ww.slabFromDepths(points).depthAt(lons, lats);
const start = performance.now();
const surface = ww.slabFromDepths(points);
const built = performance.now();
const depths = surface.depthAt(lons, lats);
const done = performance.now();
let worst = 0;
for (let i = 0; i < depths.length; i++) worst = Math.max(worst, Math.abs(depths[i] - known(lons[i], lats[i])));
check(`depth below 10,000 points is off by ${worst.toFixed(2)} km`, worst < 0.3);
console.log(
  `margin: surface through ${points.size} contour points and depth below 10,000 points: ${((done - start) / 1000).toFixed(3)} s / 0.5 s ` +
  `(of which the surface ${((built - start) / 1000).toFixed(3)} s)`,
);

// 20,000 events, 10 % of them in the crust.
const events = { longitude: [], latitude: [], depth: [] };
while (events.depth.length < 20_000) {
  const longitude = -128.4 - 3.6 * uniform();
  const latitude = -47 + 5 * uniform();
  const depth = uniform() < 0.1 ? 3 + 27 * uniform() : known(longitude, latitude) + 5 * normal();
  if (depth < 1) continue;
  events.longitude.push(longitude);
  events.latitude.push(latitude);
  events.depth.push(depth);
}
const table = ww.hypocentresOf(events);
ww.slabFromHypocentres(table);
const fitStart = performance.now();
const fitted = ww.slabFromHypocentres(table);
const fitDone = performance.now();
const trial = { longitude: [], latitude: [] };
for (let x = -131.5; x <= -129; x += 0.25) for (let y = -46.5; y <= -42.5; y += 0.25) (trial.longitude.push(x), trial.latitude.push(y));
const z = fitted.depthAt(trial.longitude, trial.latitude);
check(
  'the fitted surface is off by more than 2 km',
  z.every((value, i) => Math.abs(value - known(trial.longitude[i], trial.latitude[i])) < 2),
);
console.log(`margin: surface fitted to 20,000 hypocentres: ${((fitDone - fitStart) / 1000).toFixed(3)} s / 3 s`);
process.exitCode = wrong ? 1 : 0;
