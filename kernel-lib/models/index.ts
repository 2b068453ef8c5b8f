/** models/: how a magma changed: forward paths, and inverse fits that test them. */
export { MissingCoefficientsError, type Assemblage, type MissingCoefficient, type OwnCoefficient, type OwnCoefficients, type UsedCoefficient } from './coefficients';
export { crystallise, type CrystalliseOptions } from './crystallise';
export { isotopeElement } from './isotopes';
export type { Composition } from './one-analysis';
export type { ModelPath } from './path';
export type { TraceModelOptions } from './trace-setup';
