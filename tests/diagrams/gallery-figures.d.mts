import type * as wedgework from 'wedgework';

export function figures(ww: Omit<typeof wedgework, 'default'>): Record<string, () => wedgework.diagrams.Diagram | Promise<wedgework.diagrams.Diagram>>;
