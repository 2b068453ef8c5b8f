import { findAnalyte, isMassUnit, massUnitFactor, type MassUnit } from '../chemistry';
import { massFactor } from '../tables';
import { AssayError } from './errors';
import { cellLook, columnLetters } from './grid';
import { ownTag, readHeading, type Heading } from './heading';
import { inferUnits } from './infer-units';
import { unitKey, type Layout } from './layout';
import { headKey, type Draft, type PlanNotes, type PlannedColumn } from './planned-column';
import { keepApart } from './several-methods';
import { spellingKey, vocabulary, type SpelledUnit } from './spellings';

/** What the user settles for one column: a symbol, `label`, `ignore`, or a symbol with its unit and method. */
export type ColumnSetting =
  string | { readonly as?: string; readonly unit?: string; readonly label?: string; readonly quantity?: string; readonly ignore?: boolean };

export interface PlanOptions {
  readonly columns: Readonly<Record<string, ColumnSetting>>;
  readonly prefer: Readonly<Record<string, string>>;
  readonly unknown: 'labels' | 'quantities';
  /** Columns from here on stand beyond the head row of a text file: rows that reach there are uneven, and told as such. */
  readonly columnsWithHeads?: number;
}

/** Water not told apart is often loss on ignition by another name, and so can be negative like it. */
const signedAnalytes = new Set(['LOI', 'H2O', 'epsilon-Nd', 'epsilon-Hf']);

/**
 * Decides what every column of a laid-out sheet becomes.
 *
 * @param used receives the settings that name a column of this sheet
 * @throws AssayError for a setting with an unknown symbol or unit
 */
export function planColumns(layout: Layout, options: PlanOptions, used: Set<string>): { columns: PlannedColumn[]; notes: PlanNotes } {
  const notes: PlanNotes = { inferred: [], ignored: [], pleaseCheck: [] };
  const drafts: Draft[] = [];
  let sectionUnit: SpelledUnit | undefined;
  layout.heads.forEach((head, index) => {
    const place = columnPlace(layout, index);
    const setting = settingFor(options.columns, head, place, used);
    const filled = columnHas(layout, index);
    if (head === '' && setting === undefined && (!filled || index >= (options.columnsWithHeads ?? Infinity))) return;
    if (layout.samplesIn === 'columns' && !filled && head !== '' && setting === undefined) {
      const unit = unitWithin(head);
      if (unit !== undefined || readHeading(head).role !== 'analyte') {
        sectionUnit = unit;
        notes.ignored.push(`${place} "${head}" has no values${unit === undefined ? '' : '; its unit holds for the rows below it'}`);
        return;
      }
    }
    drafts.push(draft(layout, index, head, place, setting, sectionUnit, notes));
  });
  chooseSampleLabel(drafts, notes);
  demoteText(layout, drafts, notes);
  attachUncertainty(drafts, notes);
  inferUnits(layout, drafts, notes);
  ironAsTotal(drafts, notes);
  keepApart(drafts, options.prefer, notes);
  uniqueLabels(drafts);
  if (options.unknown === 'quantities') promoteNumbers(layout, drafts);
  return { columns: drafts, notes };
}

/** Name of a column in the report: letters, or the row number where the samples stand in columns. */
export function columnPlace(layout: Layout, index: number): string {
  return layout.samplesIn === 'rows' ? columnLetters(index) : `row ${index + 1}`;
}

function settingFor(settings: Readonly<Record<string, ColumnSetting>>, head: string, place: string, used: Set<string>): ColumnSetting | undefined {
  for (const key of [`column ${place}`, place.startsWith('row ') ? place : '', headKey(head)]) {
    if (key !== '' && Object.hasOwn(settings, key)) {
      used.add(key);
      return settings[key];
    }
  }
  return undefined;
}

function columnHas(layout: Layout, index: number): boolean {
  for (const row of layout.body) if (layout.grid.look(row, index) !== cellLook.empty) return true;
  return false;
}

/** A unit named anywhere in a section head: `Trace elements (ppm)`, `wt. %`. */
function unitWithin(text: string): SpelledUnit | undefined {
  const { units } = vocabulary();
  const whole = units.get(unitKey(text));
  if (whole !== undefined) return whole;
  for (const match of text.matchAll(/[([]([^()[\]]*)[)\]]/g)) {
    const unit = units.get(spellingKey(match[1]));
    if (unit !== undefined) return unit;
  }
  const words = text.split(/[\s,:;]+/);
  for (let count = 2; count >= 1; count--) {
    const unit =
      words.length > count
        ? (units.get(spellingKey(words.slice(-count).join(' '))) ?? units.get(spellingKey(words.slice(0, count).join(' '))))
        : undefined;
    if (unit !== undefined) return unit;
  }
  return undefined;
}

function blankDraft(index: number, head: string): Draft {
  return {
    index,
    head,
    role: 'label',
    name: headKey(head),
    unit: '',
    sheetUnit: '',
    factor: 1,
    method: '',
    sigmas: 1,
    relative: false,
    signs: 'positive',
    limit: Infinity,
    note: '',
    knownUnit: true,
    rank: Infinity,
    settled: false,
  };
}

function draft(
  layout: Layout,
  index: number,
  head: string,
  place: string,
  setting: ColumnSetting | undefined,
  sectionUnit: SpelledUnit | undefined,
  notes: PlanNotes,
): Draft {
  const made = blankDraft(index, head);
  if (head === '') made.name = layout.samplesIn === 'rows' ? `column ${place}` : place;
  if (setting !== undefined) return settle(made, setting, head === '' ? `column ${place}` : head, layout);
  const tag = ownTag.exec(head);
  if (tag !== null) return tagged(made, tag[1], tag[2] ?? '', tag[3]);
  const unitText = layout.units[index];
  const rowUnit = unitText === '' ? undefined : vocabulary().units.get(unitKey(unitText));
  let heading: Heading = readHeading(head, layout.upperCase);
  if (heading.role === 'unknown' && (rowUnit ?? sectionUnit) !== undefined) heading = readHeading(head, true);
  if (head === '' && unitText === '') notes.pleaseCheck.push(`${place} has values but no head: kept as the label "${made.name}"`);
  switch (heading.role) {
    case 'label':
      made.rank = heading.label === 'sample' ? heading.rank : Infinity;
      made.name = heading.label === 'sample' ? made.name : heading.label;
      return made;
    case 'quantity':
      return Object.assign(made, {
        role: 'quantity',
        name: heading.symbol,
        unit: heading.unit,
        sheetUnit: heading.unit,
        signs: 'signed',
        limit: heading.limit,
        factor: heading.negated ? -1 : 1,
        note: heading.negated ? 'south or west: sign turned' : '',
      } satisfies Partial<Draft>);
    case 'uncertainty':
      return Object.assign(made, {
        role: 'uncertainty',
        name: heading.of,
        sigmas: heading.sigmas,
        relative: heading.relative,
        sheetUnit: heading.unit?.unit ?? rowUnit?.unit ?? '',
        factor: heading.unit?.factor ?? 1,
        knownUnit: (heading.unit ?? rowUnit) !== undefined,
      } satisfies Partial<Draft>);
    case 'analyte': {
      const unit = heading.unit ?? rowUnit ?? sectionUnit;
      made.method = heading.method !== '' ? heading.method : layout.methods[index];
      made.note = heading.note ?? '';
      asAnalyte(made, heading.symbol, unit);
      if (unit?.unit === 'ppt' && /ppt/i.test(heading.unitText || unitText))
        notes.inferred.push(`"${head}": ppt is taken as parts per trillion (pg/g)`);
      if (unitText !== '' && rowUnit === undefined && findAnalyte(heading.symbol)!.unit !== '')
        notes.pleaseCheck.push(`${place} "${head}": its unit "${unitText}" is not known`);
      return made;
    }
    default: {
      // `SiO2 (anhydrous)`: a recast value must not pass for the measured one, nor be passed over in silence.
      const oxide = /[/+]/.test(head) ? undefined : head.split(/[^A-Za-z0-9]+/).find((piece) => findAnalyte(piece)?.kind === 'oxide');
      if (oxide !== undefined) notes.pleaseCheck.push(`${place} "${head}" names ${oxide} in a way that is not understood: kept as a label`);
      return made;
    }
  }
}

/** Makes a draft the column of an analyte, with the factor from the sheet's unit to the library's. */
function asAnalyte(made: Draft, symbol: string, unit: SpelledUnit | undefined): void {
  const analyte = findAnalyte(symbol)!;
  made.role = 'analyte';
  made.name = symbol;
  made.unit = analyte.unit;
  made.signs = signedAnalytes.has(symbol) ? 'signed' : 'positive';
  if (analyte.unit === '') {
    made.sheetUnit = '';
  } else if (unit !== undefined && isMassUnit(unit.unit)) {
    made.sheetUnit = unit.unit;
    made.factor = unit.factor * massUnitFactor(unit.unit, analyte.unit as MassUnit);
  } else made.knownUnit = false;
}

function settle(made: Draft, setting: ColumnSetting, head: string, layout: Layout): Draft {
  made.settled = true;
  made.note = 'as settled by the user';
  const given =
    typeof setting === 'string'
      ? setting === 'ignore'
        ? { ignore: true }
        : setting === 'label'
          ? { label: headKey(head) }
          : findAnalyte(setting) !== undefined
            ? { as: setting }
            : { label: setting }
      : setting;
  if (given.ignore === true) return Object.assign(made, { role: 'ignored', name: '' } as const);
  if (given.label !== undefined)
    return Object.assign(made, { role: 'label', name: given.label, rank: given.label === 'sample' ? -1 : Infinity } as const);
  if (given.quantity !== undefined) {
    return Object.assign(made, {
      role: 'quantity',
      name: given.quantity,
      unit: given.unit ?? '',
      sheetUnit: given.unit ?? '',
      signs: 'signed',
    } as const);
  }
  const own = readHeading(head, layout.upperCase);
  const symbol = given.as ?? (own.role === 'analyte' ? own.symbol : undefined);
  if (symbol === undefined || findAnalyte(symbol) === undefined) {
    throw new AssayError(
      `columns: "${head}" cannot become "${String(given.as)}". Give a symbol such as SiO2 or Ba as \`as\`, or { label: … }, { quantity: …, unit: … } or 'ignore'.`,
    );
  }
  let unit: SpelledUnit | undefined = own.role === 'analyte' ? own.unit : undefined;
  if (given.unit !== undefined) {
    unit = vocabulary().units.get(spellingKey(given.unit));
    if (unit === undefined)
      throw new AssayError(`columns: the unit "${given.unit}" of "${head}" is not known. Use wt%, ppm, ppb, ppt, mg/kg, µg/g, ng/g or g/t.`);
  }
  unit ??= vocabulary().units.get(unitKey(layout.units[made.index]));
  asAnalyte(made, symbol, unit);
  return made;
}

function tagged(made: Draft, name: string, unit: string, tag: string): Draft {
  if (tag === 'text') return Object.assign(made, { role: 'label', name, rank: name === 'sample' ? -1 : Infinity } as const);
  if (tag === 'state') return Object.assign(made, { role: 'states', name } as const);
  if (tag === '1 sigma') return Object.assign(made, { role: 'uncertainty', name, sheetUnit: unit, sigmas: 1, knownUnit: true } as const);
  return Object.assign(made, { role: 'quantity', name, unit, sheetUnit: unit, signs: 'any' } as const);
}

/** The label `sample`: the column whose head says so best, else the first text column. */
function chooseSampleLabel(drafts: Draft[], notes: PlanNotes): void {
  const named = drafts.filter(({ role, rank }) => role === 'label' && Number.isFinite(rank)).sort((a, b) => a.rank - b.rank);
  const chosen = named[0] ?? drafts.find(({ role, name }) => role === 'label' && name !== 'volcano');
  if (chosen === undefined) {
    notes.pleaseCheck.push('no column of sample names was found: samples are numbered');
    return;
  }
  if (named.length === 0) notes.inferred.push(`"${chosen.head}" is taken as the sample names`);
  for (const other of drafts) if (other !== chosen && other.role === 'label' && other.name === 'sample') other.name = 'sample (2)';
  chosen.name = 'sample';
}

/** A column headed like an analyte that holds words is a label: `S` or `Location In` are heads of many things. */
function demoteText(layout: Layout, drafts: Draft[], notes: PlanNotes): void {
  const { cells } = vocabulary();
  const step = Math.max(1, Math.floor(layout.body.length / 400));
  for (const made of drafts) {
    if ((made.role !== 'analyte' && made.role !== 'quantity' && made.role !== 'uncertainty') || made.settled) continue;
    let numbers = 0;
    let words = 0;
    for (let i = 0; i < layout.body.length; i += step) {
      const look = layout.grid.look(layout.body[i], made.index);
      if (look === cellLook.number || look === cellLook.below) numbers++;
      else if (look === cellLook.text) {
        const text = layout.grid.text(layout.body[i], made.index);
        if (/\d/.test(text) || cells.has(text.toLowerCase().replace(/\s+/g, ''))) numbers++;
        else words++;
      }
    }
    // A head with a unit of mass means the analyte, and its odd cells are faults; unless there is nothing but words.
    const sure = made.role === 'analyte' && made.knownUnit && made.sheetUnit !== '';
    if (sure ? numbers === 0 && words >= 5 : words > numbers) {
      notes.pleaseCheck.push(`"${made.head}" reads like ${made.name === '' ? 'an uncertainty' : made.name} but holds words: kept as a label`);
      Object.assign(made, { role: 'label', name: headKey(made.head), unit: '', sheetUnit: '', factor: 1, knownUnit: true, method: '' } as const);
    }
  }
}

/** An uncertainty column without a name belongs to the number column before it. */
function attachUncertainty(drafts: Draft[], notes: PlanNotes): void {
  drafts.forEach((made, at) => {
    if (made.role !== 'uncertainty') return;
    if (made.name === '') made.name = at > 0 && ['analyte', 'quantity'].includes(drafts[at - 1].role) ? drafts[at - 1].name : '';
    const of = drafts.find(({ role, name }) => (role === 'analyte' || role === 'quantity') && name === made.name);
    if (made.name === '' || of === undefined) {
      Object.assign(made, { role: 'label', name: headKey(made.head) } as const);
      return;
    }
    if (!ownTag.test(made.head))
      notes.inferred.push(`"${made.head}" is taken as ${made.sigmas}σ of ${made.name}${made.relative ? ', relative in %' : ''}`);
    made.unit = of.unit;
  });
}

/** Iron given as the element is total iron; the suite holds iron as FeO. */
function ironAsTotal(drafts: Draft[], notes: PlanNotes): void {
  for (const made of drafts) {
    if (made.role !== 'analyte' || made.name !== 'Fe') continue;
    const toOxide = massFactor('Fe', 'FeO') * massUnitFactor('ppm', 'wt%');
    Object.assign(made, { name: 'FeOT', unit: 'wt%', factor: made.factor * toOxide, note: 'element Fe as FeO' } as const);
    notes.inferred.push(`"${made.head}" is taken as total iron and expressed as FeO`);
  }
}

function uniqueLabels(drafts: Draft[]): void {
  const taken = new Set<string>();
  for (const made of drafts) {
    if (made.role !== 'label') continue;
    const base = made.name === '' ? 'label' : made.name;
    for (let count = 2; taken.has(made.name); count++) made.name = `${base} (${count})`;
    taken.add(made.name);
  }
}

/** With `unknown: 'quantities'`, labels that hold nothing but numbers become number columns. */
function promoteNumbers(layout: Layout, drafts: Draft[]): void {
  const names = new Set(drafts.filter(({ role }) => role === 'analyte' || role === 'quantity').map(({ name }) => name));
  for (const made of drafts) {
    if (made.role !== 'label' || made.name === 'sample' || made.settled || names.has(made.name)) continue;
    let numbers = 0;
    let others = 0;
    for (const row of layout.body) {
      const look = layout.grid.look(row, made.index);
      if (look === cellLook.number) numbers++;
      else if (look !== cellLook.empty) others++;
    }
    if (numbers > 0 && others === 0) Object.assign(made, { role: 'quantity', signs: 'signed' } as const);
  }
}
