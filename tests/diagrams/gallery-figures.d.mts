import type * as wedgework from 'wedgework';

export function figures(ww: typeof wedgework): Record<string, () => wedgework.diagrams.Diagram>;
