import { madeSuite } from './made-suite.mjs';

/** Every figure of the gallery: name → () => Diagram. */
export function figures(ww) {
  const { diagrams } = ww;
  const five = madeSuite(ww, { samples: 120, groups: 5 });
  const twelve = madeSuite(ww, { samples: 400, groups: 12 });
  const oneGroup = madeSuite(ww, { samples: 60, groups: 1 });
  const single = five.rows([3]);
  const none = five.rows([]);
  const missing = ww.suiteOf({ columns: [...five.columns.values()].map((each) => ww.column({ symbol: each.symbol, unit: each.unit, values: new Float64Array(five.size).fill(NaN) })), labels: five.labels });
  const wide = madeSuite(ww, { samples: 1000, groups: 5, seed: 3 });
  const uncertainty = Object.fromEntries(['Na2O', 'K2O', 'FeOT', 'MgO', 'Zr', 'Y', 'Rb', 'Nb'].map((symbol) => [symbol, { relative: 0.03 }]));
  uncertainty.SiO2 = { relative: 0.008 };
  return {
    'tas-five': () => diagrams.tas(five, { group: 'volcano' }),
    'tas-whole': () => diagrams.tas(five, { group: 'volcano', window: 'whole', also: ['alkalinity'] }),
    'tas-one': () => diagrams.tas(oneGroup),
    'tas-twelve': () => diagrams.tas(twelve, { group: 'volcano' }),
    'tas-single': () => diagrams.tas(single, { group: 'volcano', names: 'all' }),
    'tas-none': () => diagrams.tas(none, { group: 'volcano' }),
    'tas-missing': () => diagrams.tas(missing, { group: 'volcano' }),
    'tas-thousand': () => diagrams.tas(wide, { group: 'volcano' }),
    'tas-errors': () => diagrams.tas(five.where({ volcano: ['Ketu', 'Halvo'] }), { group: 'volcano', errors: 'ellipses', window: { x: [52, 64], y: [2, 7] } }),
    'tas-small': () => diagrams.tas(five, { group: 'volcano', width: 260, height: 200 }),
    'tas-names': () => diagrams.tas(five.where({ volcano: 'Halvo' }), { names: 'all' }),
    'ks-five': () => diagrams.potassiumSilica(five, { group: 'volcano' }),
    'ks-whole': () => diagrams.potassiumSilica(twelve, { group: 'volcano', window: 'whole' }),
    'miyashiro-five': () => diagrams.ironEnrichment(five, { group: 'volcano' }),
    'afm-five': () => diagrams.afm(five, { group: 'volcano' }),
    'afm-twelve': () => diagrams.afm(twelve, { group: 'volcano' }),
    'afm-none': () => diagrams.afm(none),
    'afm-many': () => diagrams.afm(madeSuite(ww, { samples: 8000, groups: 5 })),
    'xy-plain': () => diagrams.xy(oneGroup, 'SiO2', 'MgO'),
    'xy-five': () => diagrams.xy(five, 'SiO2', 'K2O', { group: 'volcano', errors: 'bars', title: 'Oruvai Arc' }),
    'xy-ellipses': () => diagrams.xy(five, 'SiO2', 'K2O', { group: 'volcano', errors: 'ellipses' }),
    'xy-log': () => diagrams.xy(twelve, 'Th/Yb', 'Ba/Th', {
      group: 'volcano', scale: 'log',
      reservoirs: [{ x: 0.04, y: 52, label: 'N-MORB' }, { x: 2.5, y: 110, label: 'sediment' }, { x: 0.3, y: 300, label: 'fluid' }],
      paths: [{ label: 'mixing', points: [[0.05, 60], [0.1, 120], [0.3, 200], [1, 230], [3, 240]], ticks: [{ x: 0.1, y: 120, label: '1 %' }, { x: 0.3, y: 200, label: '5 %' }] }],
    }),
    'xy-single': () => diagrams.xy(single, 'SiO2', 'MgO', { group: 'volcano' }),
    'xy-none': () => diagrams.xy(none, 'SiO2', 'MgO', { group: 'volcano' }),
    'xy-many': () => diagrams.xy(madeSuite(ww, { samples: 10000, groups: 5 }), 'SiO2', 'MgO', { group: 'volcano' }),
    ...Object.fromEntries(ww.schemes.list().schemes.map(({ key }) => [`scheme-${key}`, () => diagrams.scheme(five, key, { group: 'volcano', window: 'whole' })])),
    ...Object.fromEntries(['tas', 'potassium-silica', 'afm', 'affinity-zr-y', 'granite-rb-ynb'].map((key) => [`doubt-${key}`, () => diagrams.scheme(five, key, { group: 'volcano', shading: 'doubt', uncertainty })])),
    'probability-bars': () => diagrams.probabilityBars(five, 'tas', { uncertainty }),
    'ree-five-groups': () => diagrams.rareEarths(five, { group: 'volcano' }),
    'ree-samples': () => diagrams.rareEarths(five.where({ volcano: ['Ketu', 'Ondrik'] }).rows([0, 1, 2, 3, 4, 5, 6, 7, 8, 9]), { group: 'volcano' }),
    'ree-thousand': () => diagrams.rareEarths(wide, { group: 'volcano', curves: 'samples' }),
    'spider-five': () => diagrams.spider(five, { group: 'volcano', also: ['n-morb-1989'] }),
    'spider-samples': () => diagrams.spider(five.where({ volcano: ['Ketu', 'Halvo'] }).rows(Array.from({ length: 20 }, (_, i) => i)), { group: 'volcano' }),
    'spider-twelve': () => diagrams.spider(twelve, { group: 'volcano' }),
    'spider-none': () => diagrams.spider(none, { group: 'volcano' }),
    'harker-five': () => diagrams.harker(five, { group: 'volcano' }),
    'harker-mgo': () => diagrams.harker(twelve, { group: 'volcano', against: 'MgO', show: ['SiO2', 'Ni', 'Cr', 'Sc', 'Sr/Y', 'CaO/Al2O3', 'Ta'] }),
    'harker-one': () => diagrams.harker(oneGroup, { show: ['K2O'] }),
    'harker-many': () => diagrams.harker(madeSuite(ww, { samples: 8000, groups: 5 }), { group: 'volcano', show: ['MgO', 'K2O', 'Sr'] }),
    'harker-path': () => diagrams.harker(five, { group: 'volcano', show: ['MgO', 'K2O', 'CaO', 'Al2O3'], columns: 2, paths: [crystallisation(ww, five)] }),
    'tas-path': () => diagrams.tas(five, { group: 'volcano', paths: [crystallisation(ww, five)] }),
    'sry-five': () => diagrams.strontiumYttrium(five, { group: 'volcano' }),
    'sry-many': () => diagrams.strontiumYttrium(madeSuite(ww, { samples: 8000, groups: 5 })),
    'sry-none': () => diagrams.strontiumYttrium(none, { group: 'volcano' }),
    'layb-twelve': () => diagrams.lanthanumYtterbium(twelve, { group: 'volcano' }),
    'vsc-five': () => diagrams.vanadiumScandium(five, { group: 'volcano', names: 'all' }),
    'sry-silica-single': () => diagrams.strontiumYttriumSilica(single, { group: 'volcano' }),
    'sry-silica-twelve': () => diagrams.strontiumYttriumSilica(twelve, { group: 'volcano' }),
    ...Object.fromEntries(diagrams.tracerPlotNames.map((name) => [`tracer-${name}`, () => diagrams.tracerPlot(five, name, { group: 'volcano' })])),
    'tracer-many': () => diagrams.tracerPlot(madeSuite(ww, { samples: 8000, groups: 5 }), 'thorium-niobium'),
    'tracer-single': () => diagrams.tracerPlot(single, 'barium-thorium', { group: 'volcano', names: 'all' }),
    'tracer-none': () => diagrams.tracerPlot(none, 'cerium-lead', { group: 'volcano' }),
    'slab-share-five': () => diagrams.slabShareBars(five, { group: 'volcano' }),
    'slab-share-all': () => diagrams.slabShareBars(five),
    'slab-share-twelve': () => diagrams.slabShareBars(twelve, { group: 'volcano', elements: ['Ba', 'Th', 'La', 'Zr'] }),
    'wedge-corner': async () => diagrams.wedgeCorner(await ww.fitFluxedWedge(five, { group: 'volcano' }), { name: 'Ketu' }),
    'xy-path': () => diagrams.xy(five, 'Yb', 'Sr', { group: 'volcano', paths: [crystallisation(ww, five)] }),
  };
}

/** A simple path: a parent from which minerals are taken away. */
function crystallisation(ww, suite) {
  const steps = Array.from({ length: 41 }, (_, i) => 1 - 0.015 * i);
  const F = Float64Array.from(steps);
  const along = (start, D) => Float64Array.from(steps, (f) => start * f ** (D - 1));
  const made = { SiO2: [50, 0.72], TiO2: [1, 1], Al2O3: [17.5, 1.1], FeOT: [10, 1.3], MgO: [7.8, 2.6], CaO: [10.8, 1.4], Na2O: [2.3, 0.4], K2O: [0.7, 0.05], P2O5: [0.15, 0.1], Yb: [2, 0.2], Sr: [360, 1.3] };
  const liquid = ww.suiteOf({ columns: Object.entries(made).map(([symbol, [start, D]]) => ww.column({ symbol, values: along(start, D) })), labels: { sample: steps.map((f) => `F ${f}`) } });
  return { process: 'Rayleigh crystallisation', F, meaning: 'liquid left', liquid, coefficients: [], notes: [], lineage: [] };
}
