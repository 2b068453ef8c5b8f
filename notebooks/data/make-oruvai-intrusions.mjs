#!/usr/bin/env node
// Makes oruvai-intrusions.csv, 3,000 assays of older intrusions on the islands of the Oruvai Arc, and beside it
// oruvai-intrusions-truth.json with what was planted. The arc, its intrusions and every number are invented.
//
// Twenty groups. Four are fertile: high Sr/Y and V/Sc above the silica line. Of these one is fresh and fully analysed, one is altered in two
// samples of five, one was never analysed for Sc nor rare earths, one lacks rare earths. Among the others: a group whose strontium was
// added by alteration, one with high Sr/Y but reduced magma (V/Sc low), one near the limits, one full of plagioclase cumulates, and
// several without Sc.
import { readFileSync, renameSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import Papa from 'papaparse';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

const here = dirname(fileURLToPath(import.meta.url));
const seed = 43_128;
const generator = xoroshiro128plus(seed);
const uniform = (low = 0, high = 1) => low + (high - low) * uniformFloat64(generator);
const normal = (mean = 0, sd = 1) => mean + sd * Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
/** Relative laboratory error. */
const measured = (value, relative) => value * (1 + normal(0, relative));

/** kind; n samples; what was not analysed; share altered; share of cumulates; middle of the group. */
const groups = [
  { name: 'Ambrel stock', kind: 'fertile', n: 180, lacks: [], altered: 0.05, at: [-44.21, -129.62] },
  { name: 'Torvane porphyry', kind: 'fertile', n: 210, lacks: [], altered: 0.4, at: [-45.08, -130.31] },
  { name: 'Keshal stock', kind: 'fertile', n: 140, lacks: ['Sc', 'rare earths'], altered: 0.08, at: [-43.47, -128.55] },
  { name: 'Ludrin dykes', kind: 'fertile', n: 96, lacks: ['rare earths'], altered: 0.1, at: [-44.66, -129.98] },
  { name: 'Marvoe pluton', kind: 'ordinary', n: 220, lacks: [], altered: 0.05, at: [-45.52, -130.66] },
  { name: 'Ostrel pluton', kind: 'strontium gained', n: 190, lacks: [], altered: 0.92, at: [-44.93, -129.71] },
  { name: 'Pendari stock', kind: 'high Sr/Y, low V/Sc', n: 150, lacks: [], altered: 0.06, at: [-43.88, -129.12] },
  { name: 'Quillow pluton', kind: 'near the limits', n: 130, lacks: [], altered: 0.05, at: [-44.38, -128.94] },
  { name: 'Ravenor complex', kind: 'cumulates', n: 160, lacks: [], altered: 0.05, at: [-45.31, -129.86] },
  { name: 'Selwick stock', kind: 'ordinary', n: 120, lacks: ['Sc'], altered: 0.1, at: [-43.62, -129.47] },
  { name: 'Tamrith pluton', kind: 'ordinary', n: 240, lacks: [], altered: 0.04, at: [-45.77, -130.12] },
  { name: 'Umbrel sill', kind: 'ordinary', n: 84, lacks: ['Sc', 'rare earths'], altered: 0.05, at: [-44.07, -130.43] },
  { name: 'Vesmar stock', kind: 'ordinary', n: 136, lacks: [], altered: 0.3, at: [-43.29, -128.21] },
  { name: 'Wendry pluton', kind: 'ordinary', n: 204, lacks: ['rare earths'], altered: 0.05, at: [-44.82, -128.77] },
  { name: 'Yarrick dykes', kind: 'ordinary', n: 72, lacks: ['Sc'], altered: 0.15, at: [-43.71, -130.02] },
  { name: 'Zelmar pluton', kind: 'ordinary', n: 188, lacks: [], altered: 0.06, at: [-45.93, -130.87] },
  { name: 'Corvale stock', kind: 'ordinary', n: 110, lacks: [], altered: 0.2, at: [-44.51, -130.74] },
  { name: 'Dunmere pluton', kind: 'ordinary', n: 170, lacks: ['V'], altered: 0.05, at: [-45.17, -128.63] },
  { name: 'Elsgar complex', kind: 'ordinary', n: 152, lacks: [], altered: 0.08, at: [-43.95, -128.38] },
  { name: 'Fennok stock', kind: 'ordinary', n: 48, lacks: ['Sc'], altered: 0.1, at: [-43.38, -129.83] },
];

/** Chondrite values of the normalising reference, for rare earths given as normalised ratios. */
const chondrite = Object.fromEntries(
  Papa.parse(readFileSync(join(here, '../../reference-tables/reservoirs.csv'), 'utf8'), { header: true, skipEmptyLines: true })
    .data.filter((row) => row.reservoir === 'chondrite-c1-1989')
    .map((row) => [row.analyte, Number(row.value)]),
);
const rareEarths = ['La', 'Ce', 'Nd', 'Sm', 'Eu', 'Gd', 'Dy', 'Yb'];

/** Sr/Y, distance of V/Sc from the silica line, (La/Yb)N and Yb of each kind: mean and spread. */
const kinds = {
  fertile: { srY: [58, 9], vSc: [3.0, 0.9], laYb: [16, 2], yb: [0.95, 0.1], eu: [0.97, 0.04], strontium: [720, 70] },
  ordinary: { srY: [15, 4], vSc: [-3.0, 0.9], laYb: [4.5, 0.9], yb: [2.5, 0.3], eu: [0.78, 0.06], strontium: [330, 50] },
  'strontium gained': { srY: [17, 4], vSc: [-2.8, 0.9], laYb: [4.8, 0.9], yb: [2.4, 0.3], eu: [0.8, 0.06], strontium: [340, 50] },
  'high Sr/Y, low V/Sc': { srY: [55, 8], vSc: [-3.0, 0.8], laYb: [14, 2], yb: [1.0, 0.1], eu: [0.92, 0.04], strontium: [700, 70] },
  'near the limits': { srY: [35, 4], vSc: [0, 1.2], laYb: [9.5, 1.5], yb: [1.5, 0.2], eu: [0.88, 0.05], strontium: [520, 60] },
  cumulates: { srY: [18, 4], vSc: [-2.5, 0.9], laYb: [4.8, 0.9], yb: [2.3, 0.3], eu: [0.8, 0.05], strontium: [380, 50] },
};
const draw = ([mean, sd], least = 0.1) => Math.max(least, normal(mean, sd));

/** Parental lavas to granites by silica: straight lines with some scatter, wt % on the volatile-free basis. */
function majors(silica, potassium) {
  const s = silica - 54;
  const oxides = {
    SiO2: silica,
    TiO2: 1.05 - 0.04 * s,
    Al2O3: 17.6 - 0.14 * s,
    FeOT: 8.4 - 0.4 * s,
    MnO: 0.16 - 0.007 * s,
    MgO: 4.6 - 0.24 * s,
    CaO: 8.1 - 0.36 * s,
    Na2O: 3.3 + 0.06 * s,
    K2O: potassium * (1.0 + 0.11 * s),
    P2O5: 0.24 - 0.008 * s,
  };
  for (const oxide of Object.keys(oxides)) if (oxide !== 'SiO2') oxides[oxide] = Math.max(0.02, measured(oxides[oxide], 0.05));
  const rest = Object.entries(oxides).reduce((sum, [oxide, value]) => sum + (oxide === 'SiO2' ? 0 : value), 0);
  for (const oxide of Object.keys(oxides)) if (oxide !== 'SiO2') oxides[oxide] *= (100 - silica) / rest;
  return oxides;
}

function sampleOf(group, number) {
  const kind = kinds[group.kind];
  const silica = Math.min(72, Math.max(53.5, normal(62, 3.6)));
  const oxides = majors(silica, group.potassium);
  const strontium = draw(kind.strontium, 120);
  const yttrium = strontium / draw(kind.srY, 8);
  const scandium = Math.max(2.2, draw([22 - 1.15 * (silica - 54), 1.2], 2));
  const vanadium = scandium * Math.max(0.6, 32.5 - 0.385 * silica + normal(...kind.vSc));
  const yb = draw(kind.yb, 0.4);
  const laYb = draw(kind.laYb, 1.5);
  const normalised = { Yb: yb / chondrite.Yb };
  normalised.La = normalised.Yb * laYb;
  // Straight in the logarithm from La to Yb, sagging a little in the middle, as hornblende makes it; Eu by its anomaly.
  const place = { Ce: 0.12, Nd: 0.3, Sm: 0.48, Gd: 0.62, Dy: 0.78 };
  for (const [element, along] of Object.entries(place))
    normalised[element] = normalised.La * laYb ** -along * (1 - 0.3 * along * (1 - along) - (element === 'Dy' ? 0.008 * (silica - 60) : 0));
  normalised.Eu = draw(kind.eu, 0.4) * Math.sqrt(normalised.Sm * normalised.Gd);
  const elements = {
    Sc: scandium,
    V: vanadium,
    Cr: 6 + 12 * Math.max(0, oxides.MgO),
    Ni: 4 + 6 * Math.max(0, oxides.MgO),
    Cu: group.kind === 'fertile' ? draw([62, 18], 8) : draw([14 + 12 * oxides.MgO, 8], 3),
    Rb: 22 + 12 * oxides.K2O * 1.6,
    Sr: strontium,
    Y: yttrium,
    Zr: 95 + 3 * (silica - 54),
    Ba: 300 + 180 * oxides.K2O,
    ...Object.fromEntries(rareEarths.map((element) => [element, normalised[element] * chondrite[element]])),
  };
  let loss = Math.max(0.1, normal(1.1, 0.5));
  let note = '';
  if (uniform() < group.altered) {
    loss = uniform(3.4, 7.5);
    // Half of the altered ones were noted at the outcrop; the others show it in the analysis alone.
    if (uniform() < 0.5) note = ['sericite-chlorite', 'propylitic', 'albite-epidote', 'clay'][Math.floor(uniform(0, 4))];
    oxides.Na2O *= uniform(0.35, 0.9);
    oxides.CaO *= uniform(0.4, 1.1);
    oxides.K2O *= uniform(0.9, 1.9);
    if (group.kind === 'strontium gained') elements.Sr *= uniform(2.5, 5);
    else elements.Sr *= uniform(0.6, 1.3);
    elements.Cu *= uniform(0.3, 3);
  }
  if (group.kind === 'cumulates' && uniform() < 0.4) {
    const added = uniform(0.35, 0.55);
    const plagioclase = { SiO2: 52, Al2O3: 30.2, CaO: 12.6, Na2O: 4.3, K2O: 0.3, FeOT: 0.6 };
    for (const oxide of Object.keys(oxides)) oxides[oxide] = oxides[oxide] * (1 - added) + added * (plagioclase[oxide] ?? 0);
    for (const element of Object.keys(elements)) elements[element] *= 1 - added;
    elements.Sr += added * 1100;
    elements.Eu += added * 1.3;
  }
  const sum = Object.values(oxides).reduce((total, value) => total + value, 0);
  const asGiven = Object.fromEntries(Object.entries(oxides).map(([oxide, value]) => [oxide, (measured(value, 0.008) / sum) * (100 - loss)]));
  return { group, number, asGiven, loss, elements, note, latitude: group.at[0] + normal(0, 0.012), longitude: group.at[1] + normal(0, 0.016) };
}

const fixed = (value, digits) => Number(value.toFixed(digits));
const limits = { Sc: 3, V: 5, Cr: 10, Ni: 5, Cu: 5 };

function row({ group, number, asGiven, loss, elements, note, latitude, longitude }) {
  const out = {
    Sample: `${group.name.slice(0, 2).toUpperCase()}-${String(number).padStart(3, '0')}`,
    Intrusion: group.name,
    Latitude: fixed(latitude, 5),
    Longitude: fixed(longitude, 5),
    Alteration: note,
  };
  for (const [oxide, value] of Object.entries(asGiven))
    out[oxide === 'FeOT' ? 'FeO* (wt%)' : `${oxide} (wt%)`] = fixed(value, oxide === 'MnO' || oxide === 'P2O5' ? 3 : 2);
  out['LOI (wt%)'] = fixed(loss, 2);
  for (const [element, value] of Object.entries(elements)) {
    const given = measured(value, 0.03);
    const lacking = group.lacks.includes(element) || (group.lacks.includes('rare earths') && rareEarths.includes(element));
    out[`${element} (ppm)`] = lacking
      ? ''
      : given < (limits[element] ?? 0)
        ? `<${limits[element]}`
        : given >= 100
          ? fixed(given, 0)
          : fixed(given, 2);
  }
  return out;
}

const samples = groups.flatMap((group) => {
  group.potassium = uniform(0.8, 1.6);
  return Array.from({ length: group.n }, (_, i) => sampleOf(group, i + 1));
});
if (samples.length !== 3000) throw new Error(`${samples.length} samples were made; the plan is for 3000.`);

function write(file, text) {
  writeFileSync(join(here, `${file}.part`), text);
  renameSync(join(here, `${file}.part`), join(here, file));
}
write('oruvai-intrusions.csv', `${Papa.unparse(samples.map(row), { newline: '\n' })}\n`);
write(
  'oruvai-intrusions-truth.json',
  `${JSON.stringify({ seed, groups: groups.map(({ name, kind, n, lacks, altered }) => ({ name, kind, samples: n, lacks, altered })) }, null, 1)}\n`,
);
