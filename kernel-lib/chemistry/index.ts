/** chemistry/: the ground. Symbols, formulas and units; pure functions, no files. */
export * from './analytes';
export * from './formula';
export * from './melt-laws';
export * from './random';
export * from './units';
