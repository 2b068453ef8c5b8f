import { findAnalyte } from '../chemistry';
import type { Draft, PlanNotes } from './planned-column';
import { spellingKey, vocabulary } from './spellings';

/** One analyte by several methods: the preferred one has the analyte's name, the others stay beside it under their method's. */
export function keepApart(drafts: Draft[], prefer: Readonly<Record<string, string>>, notes: PlanNotes): void {
  const groups = new Map<string, Draft[]>();
  for (const made of drafts) {
    if (made.role !== 'analyte' && made.role !== 'quantity') continue;
    const group = groups.get(made.name);
    if (group === undefined) groups.set(made.name, [made]);
    else group.push(made);
  }
  for (const [symbol, group] of groups) {
    if (group.length < 2) continue;
    const ranks = group.map((made) => (made.settled ? -1 : methodRank(symbol, made.method, prefer[symbol])));
    const chosen = group[ranks.indexOf(Math.min(...ranks))];
    const taken = new Set<string>([symbol]);
    for (const other of group) {
      if (other === chosen) continue;
      let name = `${symbol} ${other.method === '' ? '(2)' : other.method}`;
      for (let count = 2; taken.has(name); count++) name = `${symbol} ${other.method} (${count})`;
      taken.add(name);
      const { head } = other;
      for (const made of drafts)
        if (made.role === 'uncertainty' && made.name === symbol && drafts.indexOf(made) === drafts.indexOf(other) + 1) made.name = name;
      Object.assign(other, { role: 'quantity', name, note: `also ${symbol}; kept apart` } as const);
      notes.pleaseCheck.push(`${symbol} stands in ${group.length} columns: "${chosen.head}" is taken, "${head}" is kept as "${name}"`);
    }
  }
}

function methodRank(symbol: string, method: string, wanted: string | undefined): number {
  const { methodPreference } = vocabulary();
  const key = spellingKey(method).replace(/-/g, '');
  if (wanted !== undefined && key.includes(spellingKey(wanted).replace(/-/g, ''))) return 0;
  const order =
    findAnalyte(symbol)?.kind === 'oxide'
      ? methodPreference.oxides
      : methodPreference.resistant.elements.includes(symbol)
        ? methodPreference.resistant.order
        : methodPreference.elements;
  const at = order.findIndex((each) => key.includes(each.toLowerCase()));
  return 1 + (at < 0 ? order.length : at);
}
