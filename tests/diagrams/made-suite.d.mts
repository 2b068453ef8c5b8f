import type * as wedgework from 'wedgework';

export function madeSuite(ww: typeof wedgework, parts: { samples: number; groups: number; seed?: number }): wedgework.Suite;
