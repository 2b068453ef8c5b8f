/** display/: how a value is shown: MIME bundles and plain tables, every text escaped. Knows nothing of rocks. */
export * from './escape';
export * from './mime';
export * from './table';
export * from './show-as';
export * from './write-whole';
export * from './zip-times';
