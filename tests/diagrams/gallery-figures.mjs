import { madeSuite } from './made-suite.mjs';

/** Every figure of the gallery: name → () => Diagram. */
export function figures(ww) {
  const { diagrams } = ww;
  const five = madeSuite(ww, { samples: 120, groups: 5 });
  const twelve = madeSuite(ww, { samples: 400, groups: 12 });
  const oneGroup = madeSuite(ww, { samples: 60, groups: 1 });
  const single = five.rows([3]);
  const none = five.rows([]);
  return {
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
  };
}
