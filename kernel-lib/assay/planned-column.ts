import type { Signs } from './cells';

/** One column of the sheet and what it shall become. */
export interface PlannedColumn {
  readonly index: number;
  readonly head: string;
  readonly role: 'analyte' | 'quantity' | 'label' | 'uncertainty' | 'states' | 'ignored';
  readonly name: string;
  readonly unit: string;
  readonly sheetUnit: string;
  readonly factor: number;
  readonly method: string;
  readonly sigmas: number;
  readonly relative: boolean;
  readonly signs: Signs;
  /** Largest size a coordinate may have. */
  readonly limit: number;
  readonly note: string;
}

/** What planning has to say besides the columns. */
export interface PlanNotes {
  readonly inferred: string[];
  readonly ignored: string[];
  readonly pleaseCheck: string[];
}

/** A column while it is being decided. */
export type Draft = { -readonly [Key in keyof PlannedColumn]: PlannedColumn[Key] } & { knownUnit: boolean; rank: number; settled: boolean };

/** A head as it is compared with the user's settings. */
export const headKey = (text: string) => text.replace(/\s+/g, ' ').trim();
