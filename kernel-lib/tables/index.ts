/** tables/: loads and validates reference-tables/, and hands out values with their source and standing. */
export * from './bibliography';
export * from './constants';
export * from './element-orders';
export * from './locate';
export * from './molar-masses';
export * from './read';
export * from './reservoirs';
export * from './standing';
