import { cellState, type Column } from '../suite';
import { findAnalyte } from '../chemistry';
import { CellDecoder, type CellConventions } from './cells';
import { cellAddress, cellLook } from './grid';
import { unguarded } from './guarded';
import type { Layout } from './layout';
import { columnPlace } from './plan-columns';
import type { PlannedColumn } from './planned-column';
import type { ImportedColumn } from './report';

/** Rows decoded together: small enough that a block of the file stays in the processor's cache while its columns are read. */
const blockRows = 512;
const mostListed = 1000;

/** Rows and columns of the grid whose cells may stand in the wrong place. */
export interface Withheld {
  readonly rows: ReadonlySet<number>;
  readonly columns: ReadonlySet<number>;
}

/** A column being filled. */
class Filling {
  readonly values: Float64Array;
  readonly states: Uint8Array;
  limits?: Float64Array;
  sigma?: Float64Array;
  readonly counts = { measured: 0, below: 0, above: 0, missing: 0, unreadable: 0 };
  readonly unreadable: { address: string; text: string; why: string }[] = [];
  readonly remarks = new Map<string, { count: number; first: string }>();
  private readonly divisor: number;
  private readonly tens: boolean;

  constructor(
    readonly plan: PlannedColumn,
    size: number,
  ) {
    this.values = new Float64Array(size);
    this.states = new Uint8Array(size);
    // 12.3 ppb is 12.3 / 1000 ppm: dividing by a whole number is correctly rounded, multiplying by 0.001 is not.
    const inverse = 1 / plan.factor;
    this.divisor =
      plan.factor !== 1 && Math.abs(plan.factor) < 1 && Math.abs(inverse - Math.round(inverse)) < 1e-9 * inverse ? Math.round(inverse) : 0;
    this.tens = plan.factor >= 10 && Number.isInteger(Math.log10(plan.factor));
  }

  convert(value: number): number {
    // 5.137 % is 51370 ppm, not 51369.99999999999.
    if (this.tens) return Number((value * this.plan.factor).toPrecision(15));
    return this.divisor !== 0 ? value / this.divisor : value * this.plan.factor;
  }

  setLimit(at: number, limit: number): void {
    this.limits ??= new Float64Array(this.values.length).fill(NaN);
    this.limits[at] = this.convert(limit);
  }
}

/** What decoding the body of a sheet gives. */
export interface DecodedSheet {
  readonly columns: Column[];
  readonly labels: Map<string, string[]>;
  readonly imported: ImportedColumn[];
  readonly remarks: string[];
}

/**
 * Decodes the planned columns of a sheet.
 *
 * @param withheld rows and columns whose numbers are not to be taken
 */
export function decodeColumns(
  layout: Layout,
  plan: readonly PlannedColumn[],
  conventions: CellConventions,
  sheet: string,
  withheld: Withheld,
): DecodedSheet {
  const { body } = layout;
  const size = body.length;
  const decoder = new CellDecoder(conventions);
  const fillings = plan
    .filter(({ role }) => role === 'analyte' || role === 'quantity' || role === 'uncertainty')
    .map((column) => new Filling(column, size));
  for (let from = 0; from < size; from += blockRows) {
    const to = Math.min(size, from + blockRows);
    for (const filling of fillings) fillBlock(layout, filling, from, to, decoder, withheld);
  }
  for (const filling of fillings) headLimits(layout, filling, decoder);
  const labels = new Map<string, string[]>();
  for (const { role, name, index } of plan) if (role === 'label') labels.set(name, readLabel(layout, index));
  const byName = new Map(fillings.filter(({ plan: { role } }) => role !== 'uncertainty').map((filling) => [filling.plan.name, filling]));
  for (const filling of fillings) if (filling.plan.role === 'uncertainty') attachSigma(filling, byName.get(filling.plan.name));
  for (const { role, name, index } of plan) if (role === 'states') attachStates(layout, index, byName.get(name));
  return {
    columns: [...byName.values()].map(toColumn),
    labels,
    imported: plan.map((column) =>
      imported(
        layout,
        column,
        fillings.find((filling) => filling.plan === column),
        sheet,
      ),
    ),
    remarks: fillings.flatMap(remarksOf),
  };
}

function fillBlock(layout: Layout, filling: Filling, from: number, to: number, decoder: CellDecoder, withheld: Withheld): void {
  const { grid, body } = layout;
  const { values, states, counts, plan } = filling;
  const { index, signs, factor, limit } = plan;
  const lowest = signs === 'positive' ? 0 : signs === 'any' ? -Infinity : Math.max(-359.9, -limit);
  const plainOnly = factor === 1;
  // Nothing withheld is the usual case, and the fast one.
  const free = withheld.rows.size === 0 && withheld.columns.size === 0;
  for (let i = from; i < to; i++) {
    const row = body[i];
    const look = grid.look(row, index);
    if (look === cellLook.number && grid.seen >= lowest && grid.seen <= limit && free) {
      values[i] = plainOnly ? grid.seen : filling.convert(grid.seen);
      counts.measured++;
    } else if (look === cellLook.empty) {
      values[i] = NaN;
      states[i] = cellState.missing;
      counts.missing++;
    } else if (look === cellLook.below && free) {
      values[i] = NaN;
      states[i] = cellState.belowDetection;
      filling.setLimit(i, grid.seen);
      counts.below++;
    } else fillSlowly(layout, filling, i, decoder, withheld.rows.has(row) || withheld.columns.has(index));
  }
}

/** A cell that is not a plain number, or must not be taken as one without a second look. */
function fillSlowly(layout: Layout, filling: Filling, i: number, decoder: CellDecoder, withheld: boolean): void {
  const { grid, body } = layout;
  const { plan, counts } = filling;
  const text = grid.text(body[i], plan.index);
  decoder.decode(text, plan.signs);
  if (decoder.fault === '' && decoder.state === cellState.measured && Math.abs(decoder.value) > plan.limit) decoder.refuse('out of range');
  if (withheld && decoder.state !== cellState.missing) decoder.refuse('its row has too many or too few cells');
  const address = addressOf(layout, body[i], plan.index);
  filling.states[i] = decoder.state;
  filling.values[i] = decoder.state === cellState.measured ? filling.convert(decoder.value) : NaN;
  if (decoder.fault !== '') {
    counts.unreadable++;
    if (filling.unreadable.length < mostListed)
      filling.unreadable.push({ address, text: text.length > 60 ? `${text.slice(0, 59)}…` : text, why: decoder.fault });
    return;
  }
  if (decoder.state === cellState.measured) counts.measured++;
  else if (decoder.state === cellState.belowDetection) counts.below++;
  else if (decoder.state === cellState.aboveRange) counts.above++;
  else counts.missing++;
  if (!Number.isNaN(decoder.limit)) filling.setLimit(i, decoder.limit);
  if (!Number.isNaN(decoder.sigma)) {
    filling.sigma ??= new Float64Array(filling.values.length).fill(NaN);
    filling.sigma[i] = filling.convert(decoder.sigma);
  }
  if (decoder.remark !== '') {
    const known = filling.remarks.get(decoder.remark);
    if (known === undefined) filling.remarks.set(decoder.remark, { count: 1, first: `${address} "${text}"` });
    else known.count++;
  }
}

/** Address in the sheet as the user sees it. */
function addressOf(layout: Layout, row: number, column: number): string {
  return layout.samplesIn === 'rows' ? cellAddress(row, column) : cellAddress(column, row);
}

/** Cells below detection (or above range) without a limit of their own take the one in the header, where there is one. */
function headLimits(layout: Layout, filling: Filling, decoder: CellDecoder): void {
  for (const [row, state] of [
    [layout.header.limit, cellState.belowDetection],
    [layout.header.upperLimit, cellState.aboveRange],
  ] as const) {
    if (row === undefined) continue;
    decoder.decode(layout.grid.text(row, filling.plan.index), 'any');
    const limit = decoder.state === cellState.measured ? decoder.value : decoder.limit;
    if (Number.isNaN(limit)) continue;
    for (let i = 0; i < filling.states.length; i++) {
      if (filling.states[i] === state && Number.isNaN(filling.limits?.[i] ?? NaN)) filling.setLimit(i, limit);
    }
  }
}

function readLabel(layout: Layout, index: number): string[] {
  const { grid, body } = layout;
  // Labels repeat (volcano names): one text is kept for all rows that share it.
  const known = new Map<string, string>();
  const texts = new Array<string>(body.length);
  for (let i = 0; i < body.length; i++) {
    const text = grid.text(body[i], index);
    let kept = known.get(text);
    if (kept === undefined) {
      kept = unguarded(text);
      if (known.size < 10_000) known.set(text, kept);
    }
    texts[i] = kept;
  }
  return texts;
}

function attachSigma(from: Filling, to: Filling | undefined): void {
  if (to === undefined) return;
  const { sigmas, relative, sheetUnit, unit } = from.plan;
  const sameUnit = sheetUnit === '' || relative || sheetUnit === to.plan.sheetUnit || sheetUnit === unit;
  if (!sameUnit) return;
  const sigma = (to.sigma ??= new Float64Array(to.values.length).fill(NaN));
  for (let i = 0; i < sigma.length; i++) {
    if (from.states[i] !== cellState.measured) continue;
    const stated = from.values[i] / sigmas;
    sigma[i] = relative ? (stated / 100) * Math.abs(to.values[i]) : sheetUnit === unit ? stated : Math.abs(to.convert(stated));
  }
}

function attachStates(layout: Layout, index: number, to: Filling | undefined): void {
  if (to === undefined) return;
  layout.body.forEach((row, i) => {
    if (layout.grid.text(row, index) === 'derived' && to.states[i] === cellState.measured) to.states[i] = cellState.derived;
  });
}

function toColumn({ plan, values, states, limits, sigma }: Filling): Column {
  const kind = findAnalyte(plan.name)?.kind ?? 'quantity';
  return {
    symbol: plan.name,
    kind,
    unit: plan.unit,
    values,
    states,
    ...(limits === undefined ? {} : { limits }),
    ...(sigma === undefined ? {} : { sigma }),
  };
}

function imported(layout: Layout, plan: PlannedColumn, filling: Filling | undefined, sheet: string): ImportedColumn {
  const none = { measured: 0, below: 0, above: 0, missing: 0, unreadable: 0 };
  return {
    head: plan.head,
    sheet,
    place: columnPlace(layout, plan.index),
    became: plan.role === 'states' ? 'cell states' : plan.role,
    name: plan.role === 'ignored' ? '' : plan.name,
    sheetUnit: plan.sheetUnit,
    unit: plan.unit,
    factor: plan.factor,
    method: plan.method,
    ...(filling?.counts ?? none),
    unreadableCells: filling?.unreadable ?? [],
    note: [plan.note, plan.method === '' ? '' : `method ${plan.method}`].filter(Boolean).join('; '),
  };
}

const remarkText: Readonly<Record<string, string>> = {
  approximate: 'cells marked as approximate, taken as measured',
  'footnote mark': 'cells with a footnote mark, taken as measured',
  'n.d.': 'cells "n.d.", which may mean not determined or not detected',
  'no-data code': 'cells with a no-data code (such as -999), taken as missing',
  'stated uncertainty': 'cells with an uncertainty beside the value',
  'grouped digits': 'cells with grouped digits',
};

function remarksOf({ plan, remarks, unreadable, counts }: Filling): string[] {
  const texts = [...remarks].map(([remark, { count, first }]) => `"${plan.head}": ${count} ${remarkText[remark]} (first: ${first})`);
  if (counts.unreadable > 0)
    texts.push(`"${plan.head}": ${counts.unreadable} unreadable (first: ${unreadable[0].address} "${unreadable[0].text}", ${unreadable[0].why})`);
  return texts;
}
