/** tracers/: ratios, normalised patterns, anomalies, slab contributions, isotopes. */
export * from './anomalies';
export { basaltFilter, type SampleFilter } from './basalt-filter';
export { decaySystems, type DecaySystem } from './decay-systems';
export {
  fluxedWedgeMelt,
  wedgeParameterNames,
  type FluxedWedgeOptions,
  type WedgeMelt,
  type WedgeMeltingStyle,
  type WedgeParameterName,
  type WedgeParameters,
} from './fluxed-wedge';
export * from './ionic-radii';
export * from './isotopes';
export { mantleArray, type ArrayLine, type ArrayOptions } from './mantle-array';
export * from './named-quantities';
export * from './pattern';
export * from './rare-earth-shape';
export * from './ratios';
export * from './reference';
export * from './reservoir-suite';
export * from './slab-partitioning';
export * from './slab-share';
export * from './unmix';
export * from './usual-ratios';
export * from './wedge-end-members';
export * from './wedge-fit';
export type { OneWedgeFit, WedgeEstimate, WedgeStatus } from './wedge-fit-one';
