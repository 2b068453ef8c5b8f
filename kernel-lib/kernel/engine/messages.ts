import type { CellOutput } from '../output';
import type { RunFacts } from '../record/run-facts';
import type { SymbolInfo } from './tslab-contract';

/** What the engine's process is asked. Every request but `open` carries a number that its answer repeats. */
export type EngineRequest =
  | { readonly ask: 'execute'; readonly id: number; readonly code: string; readonly label: string }
  | { readonly ask: 'complete'; readonly id: number; readonly code: string; readonly cursor: number }
  | { readonly ask: 'inspect'; readonly id: number; readonly code: string; readonly cursor: number }
  | { readonly ask: 'isComplete'; readonly id: number; readonly code: string }
  | { readonly ask: 'facts'; readonly id: number };

/** How a cell ended. */
export interface CellReply {
  readonly status: 'ok' | 'error';
  readonly ename?: string;
  readonly evalue?: string;
  readonly traceback?: readonly string[];
  /** True when it was stopped by an interrupt. */
  readonly interrupted?: boolean;
}

export interface CompleteReply {
  readonly start: number;
  readonly end: number;
  readonly matches: readonly { readonly text: string; readonly kind: string }[];
}

export interface InspectReply {
  readonly found: SymbolInfo | null;
}

export interface IsCompleteReply {
  readonly complete: boolean;
  readonly indent: string;
}

export type EngineAnswer = CellReply | CompleteReply | InspectReply | IsCompleteReply | RunFacts;

/** What the engine's process tells. */
export type EngineReport =
  | { readonly tell: 'ready'; readonly compiler: string; readonly warning?: string }
  | { readonly tell: 'output'; readonly id: number; readonly output: CellOutput }
  | { readonly tell: 'answer'; readonly id: number; readonly answer: EngineAnswer }
  | { readonly tell: 'failed'; readonly id: number; readonly message: string };

/** What the engine needs to start, handed over in its first argument as JSON. */
export interface EngineOptions {
  /** Folder of the notebook. */
  readonly folder: string;
  /** Whether the library is loaded as `ww` before the first cell. */
  readonly preload: boolean;
  readonly quiet: boolean;
  /** Folder that takes every file the cells write through the library, for a trial run. */
  readonly scratch?: string;
}
