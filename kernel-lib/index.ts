/**
 * wedgework: arc-lava geochemistry in a notebook. The public face: what a notebook may use, room by room, and nothing else.
 * Every type that a public signature mentions is exported too, because a notebook compiles its cells against this file.
 */

// chemistry/
export * from './chemistry';
// tables/
export * from './tables';
// display/
export * from './display';
// suite/
export * from './suite';
// recast/
export * from './recast';
// assay/
export * from './assay';
// classify/
export * from './classify';
// tracers/
export * from './tracers';
// models/
export * from './models';
// fertility/
export * from './fertility';
// margin/
export * from './margin';
// diagrams/
export * as diagrams from './diagrams';
// kernel/
export * from './kernel';
