import { textWidth } from '../../kernel-lib/diagrams/font';

/** Loose reading of a specification, for tests. */
export type Spec = { readonly [name: string]: any };

/** The panels of a specification: each a layered view with a size. */
export function panelsOf(spec: Spec): Spec[] {
  return spec.concat ?? [spec];
}

/** All units of a panel. */
export function unitsOf(panel: Spec): Spec[] {
  return panel.layer.flatMap((unit: Spec) => (unit.layer === undefined ? [unit] : unitsOf(unit)));
}

export function captionOf(spec: Spec): string {
  return (spec.title?.text ?? []).join(' ');
}

export function rowsOf(unit: Spec): Spec[] {
  return unit.data?.values ?? [];
}

/** Titles of the two axes of a panel. */
export function axisTitles(panel: Spec): { x: string; y: string } {
  const unit = unitsOf(panel).find(({ encoding }) => encoding?.x?.axis !== undefined)!;
  const text = (axis: Spec | null) => [axis?.title ?? ''].flat().join(' ');
  return { x: text(unit.encoding.x.axis), y: text(unit.encoding.y.axis) };
}

/** Pixels of a data point in a panel, from its scales: independent of the library's own mapping. */
export function pixelsOf(panel: Spec): (x: number, y: number) => [number, number] {
  const { x, y } = unitsOf(panel).find(({ encoding }) => encoding?.x?.scale !== undefined)!.encoding;
  const part = (scale: Spec, value: number) => {
    const [low, high] = scale.domain;
    return scale.type === 'log' ? Math.log10(value / low) / Math.log10(high / low) : (value - low) / (high - low);
  };
  return (a, b) => [part(x.scale, a) * panel.width, (1 - part(y.scale, b)) * panel.height];
}

export interface TextBox {
  readonly text: string;
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** The boxes of all centred texts inside a panel (field names, labels), measured in the shipped font. Lines start at the row's place and run down. */
export function labelBoxes(panel: Spec): TextBox[] {
  const place = pixelsOf(panel);
  return unitsOf(panel)
    .filter(({ mark, encoding }) => mark.type === 'text' && mark.clip === true && encoding?.text?.field === 't')
    .flatMap(({ mark, data }) =>
      data.values.map((row: Spec): TextBox => {
        const lines = String(row.t).split('\n');
        const size: number = mark.fontSize;
        const width = Math.max(...lines.map((line) => textWidth(line, { size, italic: mark.fontStyle === 'italic', bold: mark.fontWeight === 600 })));
        const [x, y] = place(row.x, row.y);
        // The height of small letters and capitals, not the whole line: what the eye sees as touching.
        return {
          text: String(row.t),
          left: x - width / 2,
          right: x + width / 2,
          top: y - size * 0.45,
          bottom: y + (lines.length - 1) * mark.lineHeight + size * 0.45,
        };
      }),
    );
}

/** All straight pieces drawn as boundaries or lines, in pixels. */
export function drawnSegments(panel: Spec): [number, number, number, number][] {
  const place = pixelsOf(panel);
  const rules = unitsOf(panel)
    .filter(({ mark, encoding }) => mark.type === 'rule' && encoding.x2 !== undefined && encoding.color === undefined)
    .flatMap((unit) => rowsOf(unit).map((row): [number, number, number, number] => [...place(row.x, row.y), ...place(row.x2, row.y2)]));
  return rules;
}

/** Whether a segment passes through a box, by dense sampling. */
export function passesThrough([ax, ay, bx, by]: readonly [number, number, number, number], box: TextBox): boolean {
  const steps = Math.max(2, Math.ceil(Math.hypot(bx - ax, by - ay)));
  for (let i = 0; i <= steps; i++) {
    const x = ax + ((bx - ax) * i) / steps;
    const y = ay + ((by - ay) * i) / steps;
    if (x > box.left && x < box.right && y > box.top && y < box.bottom) return true;
  }
  return false;
}
