/** suite/: the table of analyses: columns with cell states, labels, lineage; expressions over columns; data frames. */
export * from './column';
export * from './expression';
export * from './frame';
export * from './inputs';
export * from './lineage';
export * from './lineage-file';
export * from './resolve';
export * from './sources';
export * from './suite';
