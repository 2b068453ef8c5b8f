import type * as wedgework from 'wedgework';

export function madeSuite(ww: Omit<typeof wedgework, 'default'>, parts: { samples: number; groups: number; seed?: number }): wedgework.Suite;
