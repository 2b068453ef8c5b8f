/** One output of a cell, as notebook files and front ends know it. */
export type CellOutput = StreamOutput | DisplayOutput | ErrorOutput;

export interface StreamOutput {
  readonly kind: 'stream';
  readonly name: 'stdout' | 'stderr';
  readonly text: string;
}

/** Something shown: `result` is the value of a cell's last expression, `update` replaces the display with the same id. */
export interface DisplayOutput {
  readonly kind: 'result' | 'display' | 'update';
  readonly data: Readonly<Record<string, unknown>>;
  readonly metadata: Readonly<Record<string, unknown>>;
  readonly displayId?: string;
}

export interface ErrorOutput {
  readonly kind: 'error';
  readonly ename: string;
  readonly evalue: string;
  readonly traceback: readonly string[];
}
