#!/usr/bin/env node
// Writes the invented margin of the Oruvai Arc: a trench line and a hypocentre catalogue. Every number is made up; the seed is fixed, so a run gives
// the same files. The slab dips west below Ketu and Marrin at 95–110 km, Halvo 120, Tessary 145, Ondrik 185 km.
//   node make-oruvai-margin.mjs
import { writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const here = dirname(fileURLToPath(import.meta.url));
let state = 4430;
/** Uniform in [0, 1): mulberry32. */
function uniform() {
  state = (state + 0x6d2b79f5) >>> 0;
  let t = Math.imul(state ^ (state >>> 15), 1 | state);
  t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
  return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
}
const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());

const kmPerLatitude = 111.1;
const kmPerLongitude = (latitude) => 111.32 * Math.cos((latitude * Math.PI) / 180);
/** Longitude of the trench: bowed to the east. */
const trenchLongitude = (latitude) => -127.48 - 0.035 * (latitude + 44.3) ** 2;
/** Depth of the slab (km) at a distance west of the trench (km). */
const slabDepth = (distance, latitude) =>
  7 + 0.2193 * distance + 0.001824 * distance ** 2 + 3 * Math.sin((latitude + 44) * 1.7) * Math.min(1, distance / 150);

const trench = ['longitude,latitude'];
for (let latitude = -42; latitude >= -46.61; latitude -= 0.2) trench.push(`${trenchLongitude(latitude).toFixed(3)},${latitude.toFixed(2)}`);
writeFileSync(join(here, 'oruvai-trench.csv'), trench.join('\n') + '\n');

const lines = ['id,time,latitude,longitude,depth,depthError,mag,type'];
const south = -46.3;
const north = -42.3;
let number = 0;
function event(longitude, latitude, depth, depthError) {
  const when = new Date(Date.UTC(2018, 0, 1) + Math.floor(uniform() * 6 * 365.25 * 86400) * 1000).toISOString();
  const magnitude = 2.8 - Math.log10(1 - uniform()) / 1.05;
  number++;
  lines.push(
    [
      `ov${String(number).padStart(4, '0')}`, when, latitude.toFixed(3), longitude.toFixed(3), depth.toFixed(1), depthError === undefined ? '' : depthError.toFixed(1),
      Math.min(7.1, magnitude).toFixed(1), 'earthquake',
    ].join(','),
  );
}
while (number < 1100) {
  const latitude = south + (north - south) * uniform();
  const perDegree = kmPerLongitude(latitude);
  const draw = uniform();
  if (draw < 0.1) {
    // Crust of the upper plate, below and behind the arc.
    event(trenchLongitude(latitude) - (60 + 280 * uniform()) / perDegree, latitude, 3 + 24 * uniform() ** 1.3, 1 + 4 * uniform());
    continue;
  }
  if (draw < 0.13) {
    // Poorly located: the network's default depths.
    event(trenchLongitude(latitude) - (20 + 250 * uniform()) / perDegree, latitude, uniform() < 0.6 ? 10 : 33);
    continue;
  }
  // More events up-dip; a lower plane between 60 and 180 km.
  let distance = 25 + 285 * uniform() ** 1.15;
  let depth = slabDepth(distance, latitude);
  if (depth > 60 && depth < 180 && uniform() < 0.27) {
    const tilt = Math.atan(0.2193 + 2 * 0.001824 * distance);
    distance -= 26 * Math.sin(tilt);
    depth += 26 * Math.cos(tilt);
  }
  const error = 2 + 5 * uniform();
  depth += Math.hypot(3, error) * normal();
  if (depth < 2) continue;
  event(trenchLongitude(latitude) - distance / perDegree + (2 * normal()) / perDegree, latitude + (2 * normal()) / kmPerLatitude, depth, error);
}
writeFileSync(join(here, 'oruvai-hypocentres.csv'), lines.join('\n') + '\n');
