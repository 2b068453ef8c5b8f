/** tracers/: ratios, normalised patterns, anomalies, slab contributions, isotopes. */
export * from './anomalies';
export * from './named-quantities';
export * from './pattern';
export * from './ratios';
export * from './reference';
export * from './usual-ratios';
