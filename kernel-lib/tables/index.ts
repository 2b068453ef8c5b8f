/** tables/: loads and validates reference-tables/, and hands out values with their source and standing. */
export * from './bibliography';
export * from './bibtex';
export * from './constants';
export * from './element-orders';
export * from './locate';
export * from './mantle-modes';
export * from './mineral-compositions';
export * from './molar-masses';
export * from './partition-coefficients';
export * from './read';
export * from './reservoirs';
export * from './standing';
