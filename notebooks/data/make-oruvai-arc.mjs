#!/usr/bin/env node
// Makes the demonstration workbook oruvai-arc.xlsx and, beside it, oruvai-arc-truth.json with what was put in.
//
// The Oruvai Arc and every number here are invented. The lavas follow from known models, so that an analysis can be held against the truth:
// melts of one depleted mantle with slab fluid and sediment added (batch melting), then crystallisation in two stages (mineral subtraction
// for major oxides, Rayleigh's law for traces), for one volcano mixing of its own end members, then the analytical error of a laboratory.
// The one row that is not invented is the reference material BHVO-2: its true values are the published ones, with laboratory error on top.
import { readFileSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import * as XLSX from '@e965/xlsx';
import Papa from 'papaparse';

const here = dirname(fileURLToPath(import.meta.url));
const seed = 20_411;
let state = seed;
/** Uniform in [0, 1), the same on every machine (mulberry32). */
function uniform() {
  state = (state + 0x6d2b79f5) >>> 0;
  let t = Math.imul(state ^ (state >>> 15), 1 | state);
  t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
  return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
}
const normal = () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());

// ---- source ------------------------------------------------------------------------------------------------------------------------
const oxides = ['SiO2', 'TiO2', 'Al2O3', 'FeOT', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5'];
const traces = [
  'Sc', 'V', 'Cr', 'Co', 'Ni', 'Cu', 'Zn', 'Ga', 'Rb', 'Sr', 'Y', 'Zr', 'Nb', 'Cs', 'Ba', 'La', 'Ce', 'Pr', 'Nd', 'Sm', 'Eu', 'Gd', 'Tb', 'Dy',
  'Ho', 'Er', 'Tm', 'Yb', 'Lu', 'Hf', 'Ta', 'Pb', 'Th', 'U',
];
const fromSlab = ['Rb', 'Sr', 'Y', 'Zr', 'Nb', 'Cs', 'Ba', 'La', 'Ce', 'Pr', 'Nd', 'Sm', 'Eu', 'Gd', 'Tb', 'Dy', 'Ho', 'Er', 'Tm', 'Yb', 'Lu', 'Hf', 'Ta', 'Pb', 'Th', 'U'];
const row = (names, values) => Object.fromEntries(names.map((name, i) => [name, values[i]]));

// Invented end members (ppm) and bulk coefficients of the residue, in the usual order of size for their kind.
const mantle = row(fromSlab, [0.05, 7.8, 3.3, 5.1, 0.15, 0.0014, 0.56, 0.19, 0.56, 0.101, 0.58, 0.24, 0.096, 0.36, 0.07, 0.5, 0.113, 0.35, 0.0545, 0.365, 0.0555, 0.16, 0.01, 0.018, 0.008, 0.0032]);
const fluid = row(fromSlab, [280, 7000, 3, 14, 0.4, 11, 4200, 20, 36, 4.3, 16, 2.6, 0.85, 1.9, 0.24, 1.1, 0.2, 0.5, 0.07, 0.4, 0.06, 0.4, 0.02, 120, 0.9, 3.2]);
const sediment = row(fromSlab, [62, 330, 29, 128, 8.9, 3.4, 780, 29, 58, 6.9, 27, 5.8, 1.3, 5.3, 0.82, 5, 1.0, 2.9, 0.43, 2.8, 0.42, 4, 0.62, 20, 6.9, 1.7]);
const residue = row(fromSlab, [0.001, 0.02, 0.09, 0.03, 0.004, 0.0005, 0.0005, 0.009, 0.015, 0.02, 0.03, 0.045, 0.05, 0.06, 0.07, 0.08, 0.09, 0.1, 0.105, 0.11, 0.12, 0.035, 0.004, 0.02, 0.002, 0.002]);
// Elements that the slab hardly touches: parental contents (ppm).
const parental = { Sc: 36, V: 265, Cr: 270, Co: 40, Ni: 105, Cu: 82, Zn: 72, Ga: 16 };

const batchMelt = (F, x, y) => row(fromSlab, fromSlab.map((el) => (mantle[el] * (1 - x - y) + fluid[el] * x + sediment[el] * y) / (residue[el] + F * (1 - residue[el]))));

// ---- crystallisation ---------------------------------------------------------------------------------------------------------------
const minerals = {
  olivine: row(oxides, [38.9, 0, 0, 18.4, 0.3, 42.2, 0.2, 0, 0, 0]),
  clinopyroxene: row(oxides, [51.5, 0.6, 3.2, 7.5, 0.2, 16.0, 20.7, 0.3, 0, 0]),
  orthopyroxene: row(oxides, [53.5, 0.25, 1.5, 18.0, 0.45, 24.8, 1.5, 0, 0, 0]),
  plagioclaseAn80: row(oxides, [48.0, 0, 33.2, 0.5, 0, 0, 16.0, 2.2, 0.1, 0]),
  plagioclaseAn60: row(oxides, [53.0, 0, 29.8, 0.4, 0, 0, 12.2, 4.3, 0.3, 0]),
  magnetite: row(oxides, [0.1, 9.2, 3.1, 84.1, 0.5, 3.0, 0, 0, 0, 0]),
  apatite: row(oxides, [0, 0, 0, 0.3, 0, 0, 56.5, 0, 0, 43.2]),
};
const D = {
  olivine: { Sc: 0.2, V: 0.06, Cr: 1.2, Co: 4, Ni: 12, Zn: 1 },
  clinopyroxene: { Sc: 3.2, V: 1.3, Cr: 8, Co: 1.1, Ni: 2.5, Cu: 0.1, Zn: 0.5, Ga: 0.4, Rb: 0.01, Sr: 0.1, Y: 0.6, Zr: 0.15, Nb: 0.01, Ba: 0.005, La: 0.08, Ce: 0.12, Pr: 0.18, Nd: 0.25, Sm: 0.42, Eu: 0.45, Gd: 0.52, Tb: 0.56, Dy: 0.6, Ho: 0.6, Er: 0.58, Tm: 0.56, Yb: 0.55, Lu: 0.54, Hf: 0.25, Ta: 0.02, Pb: 0.04, Th: 0.01, U: 0.01 },
  orthopyroxene: { Sc: 1.4, V: 0.9, Cr: 5, Co: 3, Ni: 4, Zn: 2, Ga: 0.2, Y: 0.2, Zr: 0.05, La: 0.01, Ce: 0.015, Nd: 0.03, Sm: 0.06, Eu: 0.07, Gd: 0.1, Tb: 0.12, Dy: 0.16, Ho: 0.2, Er: 0.24, Tm: 0.28, Yb: 0.33, Lu: 0.38, Hf: 0.06 },
  plagioclaseAn80: { Ga: 0.9, Rb: 0.05, Sr: 1.7, Y: 0.02, Cs: 0.03, Ba: 0.2, La: 0.14, Ce: 0.11, Pr: 0.09, Nd: 0.08, Sm: 0.06, Eu: 0.5, Gd: 0.04, Tb: 0.03, Dy: 0.03, Ho: 0.02, Er: 0.02, Pb: 0.3 },
  plagioclaseAn60: { Ga: 1.1, Rb: 0.07, Sr: 2.4, Y: 0.03, Cs: 0.04, Ba: 0.33, La: 0.2, Ce: 0.16, Pr: 0.13, Nd: 0.11, Sm: 0.08, Eu: 0.9, Gd: 0.06, Tb: 0.05, Dy: 0.04, Ho: 0.03, Er: 0.03, Pb: 0.5 },
  magnetite: { Sc: 1.6, V: 14, Cr: 20, Co: 8, Ni: 10, Cu: 0.5, Zn: 4, Ga: 2.5, Y: 0.2, Zr: 0.2, Nb: 0.4, Hf: 0.2, Ta: 0.5 },
  apatite: { Y: 20, La: 11, Ce: 14, Pr: 17, Nd: 20, Sm: 24, Eu: 16, Gd: 26, Tb: 25, Dy: 23, Ho: 21, Er: 19, Tm: 16, Yb: 13, Lu: 11, Sr: 2, Th: 1.5, U: 1.2 },
};
const bulk = (assemblage, pick) => Object.entries(assemblage).reduce((sum, [mineral, share]) => sum + share * (pick(mineral) ?? 0), 0);

/** The liquid left when a share F of the parent remains after the stages, each `{ to, assemblage }` with `to` the F at which it ends. */
function crystallise(parent, stages, F) {
  let liquid = { ...parent };
  let from = 1;
  for (const { to, assemblage } of stages) {
    const end = Math.max(F, to);
    if (end >= from) break;
    const f = end / from;
    const next = {};
    for (const oxide of oxides) next[oxide] = (liquid[oxide] - (1 - f) * bulk(assemblage, (mineral) => minerals[mineral][oxide])) / f;
    for (const el of traces) next[el] = liquid[el] * f ** (bulk(assemblage, (mineral) => D[mineral][el]) - 1);
    liquid = next;
    from = end;
  }
  return liquid;
}

const tholeiitic = [
  { to: 0.55, assemblage: { olivine: 0.18, clinopyroxene: 0.3, plagioclaseAn80: 0.52 } },
  { to: 0.24, assemblage: { plagioclaseAn60: 0.58, clinopyroxene: 0.14, orthopyroxene: 0.13, magnetite: 0.147, apatite: 0.003 } },
];
const calcAlkaline = [
  { to: 0.55, assemblage: { olivine: 0.14, clinopyroxene: 0.3, plagioclaseAn80: 0.5, magnetite: 0.06 } },
  { to: 0.24, assemblage: { plagioclaseAn60: 0.56, clinopyroxene: 0.15, orthopyroxene: 0.2, magnetite: 0.086, apatite: 0.004 } },
];

// ---- the five volcanoes, front to rear ---------------------------------------------------------------------------------------------
const volcanoes = [
  { name: 'Ketu', code: 'KE', latitude: -44.12, longitude: -129.62, slabDepth: 98, n: 27, F: 0.17, x: 0.0062, y: 0.0008, stages: tholeiitic, K2O: 0.3, Na2O: 2.0, Sr: 0.70322, Nd: 0.51306, Pb: [18.62, 15.56, 38.32] },
  { name: 'Marrin', code: 'MA', latitude: -44.86, longitude: -129.75, slabDepth: 106, n: 26, F: 0.15, x: 0.0055, y: 0.0014, stages: tholeiitic, K2O: 0.42, Na2O: 2.1, Sr: 0.70331, Nd: 0.51303, Pb: [18.66, 15.57, 38.38] },
  { name: 'Halvo', code: 'HA', latitude: -43.71, longitude: -129.96, slabDepth: 126, n: 30, F: 0.12, x: 0.0046, y: 0.0026, stages: calcAlkaline, K2O: 0.75, Na2O: 2.3, Sr: 0.70345, Nd: 0.51297, Pb: [18.7, 15.59, 38.46] },
  { name: 'Tessary', code: 'TE', latitude: -44.4, longitude: -130.28, slabDepth: 151, n: 24, F: 0.085, x: 0.0035, y: 0.0042, stages: calcAlkaline, K2O: 1.25, Na2O: 2.5, Sr: 0.70362, Nd: 0.51291, Pb: [18.74, 15.6, 38.55] },
  { name: 'Ondrik', code: 'ON', latitude: -44.05, longitude: -130.72, slabDepth: 186, n: 20, F: 0.045, x: 0.0021, y: 0.0045, stages: calcAlkaline, K2O: 1.75, Na2O: 2.9, Sr: 0.70371, Nd: 0.51288, Pb: [18.77, 15.61, 38.6] },
];

function parentOf({ F, x, y, K2O, Na2O }) {
  const parent = { SiO2: 50.6, TiO2: 0.8 + 1.2 * (0.17 - F), Al2O3: 17, FeOT: 8.8, MnO: 0.17, MgO: 7.6, CaO: 11, Na2O, K2O, P2O5: 0.11 + 0.8 * (0.17 - F), ...parental, ...batchMelt(F, x, y) };
  const sum = oxides.reduce((total, oxide) => total + parent[oxide], 0);
  for (const oxide of oxides) parent[oxide] *= 100 / sum;
  return parent;
}

// ---- the laboratory ----------------------------------------------------------------------------------------------------------------
const relativeError = { SiO2: 0.004, TiO2: 0.012, Al2O3: 0.006, FeOT: 0.007, MnO: 0.02, MgO: 0.009, CaO: 0.007, Na2O: 0.013, K2O: 0.013, P2O5: 0.025 };
const traceError = 0.028;
const limits = { Sc: 1, V: 5, Cr: 10, Co: 1, Ni: 3, Cu: 2, Zn: 5, Ga: 0.5, Rb: 0.2, Sr: 0.5, Y: 0.1, Zr: 1, Nb: 0.2, Cs: 0.05, Ba: 1, La: 0.05, Ce: 0.05, Pr: 0.02, Nd: 0.05, Sm: 0.02, Eu: 0.01, Gd: 0.02, Tb: 0.01, Dy: 0.02, Ho: 0.01, Er: 0.02, Tm: 0.01, Yb: 0.02, Lu: 0.01, Hf: 0.05, Ta: 0.05, Pb: 0.3, Th: 0.05, U: 0.05 };
const ferric = 1.11134; // FeO to Fe2O3, from the IUPAC atomic weights

/** What the laboratory reports for a true composition: oxides in wt % with iron as Fe2O3T, traces in ppm or `<limit`. */
function assay(truth, loi) {
  // Iron is reported as Fe2O3, so the parts are scaled to a sum of 100 on the laboratory's form, volatiles included.
  const wet = (100 - loi) / oxides.reduce((sum, oxide) => sum + truth[oxide] * (oxide === 'FeOT' ? ferric : 1), 0);
  const cells = {};
  let total = loi;
  for (const oxide of oxides) {
    const value = truth[oxide] * wet * (oxide === 'FeOT' ? ferric : 1) * (1 + relativeError[oxide] * normal());
    const printed = value.toFixed(2);
    cells[oxide === 'FeOT' ? 'Fe2O3T' : oxide] = Number(printed);
    total += Number(printed);
  }
  cells.LOI = Number(loi.toFixed(2));
  cells.Total = Number(total.toFixed(2));
  for (const el of traces) {
    const value = truth[el] === undefined ? NaN : truth[el] * wet * (1 + traceError * normal());
    cells[el] = Number.isNaN(value) ? '' : value < limits[el] ? `<${limits[el]}` : Number(value.toPrecision(value < 1 ? 2 : 3));
  }
  return cells;
}

const rows = [];
const truths = [];
for (const volcano of volcanoes) {
  const parent = parentOf(volcano);
  const mafic = crystallise(parent, volcano.stages, 0.93);
  const silicic = crystallise(parent, volcano.stages, 0.28);
  for (let i = 0; i < volcano.n; i++) {
    const mixed = volcano.name === 'Halvo' && i % 4 === 1;
    const share = 0.3 + 0.4 * uniform();
    const remaining = 0.24 + 0.76 * ((i + 0.5) / volcano.n) ** 0.8;
    const liquid = mixed
      ? Object.fromEntries([...oxides, ...traces].map((name) => [name, share * mafic[name] + (1 - share) * silicic[name]]))
      : crystallise(parent, volcano.stages, remaining);
    const sample = `${volcano.code}-${String(i + 1).padStart(2, '0')}`;
    const loi = Math.max(0.05, 0.5 + 0.35 * normal());
    const isotopes = i % 6 === 0
      ? { '87Sr/86Sr': (volcano.Sr + 2e-5 * normal()).toFixed(6), '143Nd/144Nd': (volcano.Nd + 1e-5 * normal()).toFixed(6), '206Pb/204Pb': (volcano.Pb[0] + 0.006 * normal()).toFixed(3), '207Pb/204Pb': (volcano.Pb[1] + 0.003 * normal()).toFixed(3), '208Pb/204Pb': (volcano.Pb[2] + 0.01 * normal()).toFixed(3) }
      : {};
    const altered = sample === 'MA-09';
    if (altered) Object.assign(liquid, { K2O: liquid.K2O * 3.1, Na2O: liquid.Na2O * 0.6, CaO: liquid.CaO * 0.72, Rb: liquid.Rb * 4, Cs: liquid.Cs * 6, Ba: liquid.Ba * 2.2 });
    const place = { Sample: sample, Volcano: volcano.name, Latitude: Number((volcano.latitude + 0.02 * normal()).toFixed(4)), Longitude: Number((volcano.longitude + 0.025 * normal()).toFixed(4)) };
    const one = { truth: liquid, loi: altered ? 6.4 : loi, place, isotopes };
    rows.push({ ...place, ...assay(liquid, one.loi), ...isotopes });
    truths.push({ sample, volcano: volcano.name, ...(mixed ? { mixing: { maficShare: share, maficF: 0.93, silicicF: 0.28 } } : { F: remaining }), ...(altered ? { altered: true } : {}) });
    // Every twentieth sample is analysed a second time, blind.
    if (rows.length % 20 === 7) rows.push({ ...place, ...assay(liquid, one.loi), ...isotopes });
  }
}

// Reference material rows, spread through the run: the values of Jochum et al. 2016 from the project's own table, and for the elements
// that they leave out those of the certificate.
const published = {};
for (const r of Papa.parse(readFileSync(join(here, '..', '..', 'reference-tables', 'reference-materials.csv'), 'utf8'), { header: true, skipEmptyLines: true }).data) {
  const best = /^jochum_2016/i.test(r.source ?? r.source_key);
  if (r.material === 'BHVO-2' && (best || published[r.analyte] === undefined)) published[r.analyte] = Number(r.value);
}
const standard = Object.fromEntries([...oxides, ...traces].map((name) => [name, name === 'FeOT' ? (published.FeOT ?? published.Fe2O3T / ferric) : published[name]]));
for (let k = 0; k < 4; k++) rows.splice(15 + 34 * k, 0, { Sample: 'BHVO-2', Volcano: '', Latitude: '', Longitude: '', ...assay(standard, 0), LOI: '' });

// ---- writing -----------------------------------------------------------------------------------------------------------------------
const heads = {
  Sample: 'Sample', Volcano: 'Volcano', Latitude: 'Latitude', Longitude: 'Longitude', Batch: 'Batch',
  ...Object.fromEntries(['SiO2', 'TiO2', 'Al2O3', 'Fe2O3T', 'MnO', 'MgO', 'CaO', 'Na2O', 'K2O', 'P2O5', 'LOI', 'Total'].map((oxide) => [oxide, `${oxide} (wt%)`])),
  ...Object.fromEntries(traces.map((el) => [el, `${el} (ppm)`])),
  ...Object.fromEntries(['87Sr/86Sr', '143Nd/144Nd', '206Pb/204Pb', '207Pb/204Pb', '208Pb/204Pb'].map((ratio) => [ratio, ratio])),
};
const number = (cell) => (typeof cell === 'string' && /^\d+(\.\d+)?$/.test(cell) ? Number(cell) : (cell ?? ''));
const table = [Object.values(heads), ...rows.map((cells, i) => Object.keys(heads).map((name) => (name === 'Batch' ? `B${1 + Math.floor(i / 48)}` : number(cells[name]))))];
const book = XLSX.utils.book_new();
book.Props = { Title: 'Oruvai Arc, invented whole-rock analyses', CreatedDate: new Date(0) };
XLSX.utils.book_append_sheet(book, XLSX.utils.aoa_to_sheet(table), 'Assays');
writeFileSync(join(here, 'oruvai-arc.xlsx'), XLSX.write(book, { type: 'buffer', bookType: 'xlsx', compression: true }));

const model = { mantle, fluid, sediment, residue, minerals, coefficients: D, stages: { tholeiitic, calcAlkaline } };
const parents = Object.fromEntries(volcanoes.map((volcano) => [volcano.name, { ...volcano, stages: volcano.stages === tholeiitic ? 'tholeiitic' : 'calcAlkaline', parent: parentOf(volcano) }]));
const rounded = (_, value) => (typeof value === 'number' ? Number(value.toPrecision(8)) : value);
writeFileSync(join(here, 'oruvai-arc-truth.json'), `${JSON.stringify({ seed, note: 'Invented. What make-oruvai-arc.mjs put into oruvai-arc.xlsx.', volcanoes: parents, model, samples: truths }, rounded, 1)}\n`);
console.log(`${rows.length} rows, ${rows.flatMap((cells) => Object.values(cells)).filter((cell) => String(cell).startsWith('<')).length} cells below detection`);
