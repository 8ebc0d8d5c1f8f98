import type { Style } from '../chart/spec.ts';
import { textWidth } from '../record/text-width.ts';

/** What a text is set on. */
export interface Page {
  /** Columns. */
  readonly width: number;
  readonly style: Style;
}

/**
 * Breaks a text at blanks into lines of at most `width` columns; indents are kept, and a word that is longer than a line is
 * broken. Characters two columns wide count as two.
 */
export function wrapped(text: string, width: number): readonly string[] {
  return text.split('\n').flatMap((paragraph) => {
    const indent = /^ */.exec(paragraph)?.[0] ?? '';
    const room = Math.max(1, width - indent.length);
    const lines: string[] = [];
    let line = '';
    for (const word of paragraph.slice(indent.length).split(' ')) {
      if (line !== '' && textWidth(line) + 1 + textWidth(word) > room) {
        lines.push(indent + line);
        line = '';
      }
      let rest = word;
      while (textWidth(rest) > room) {
        const piece = leading(rest, room);
        lines.push(indent + piece);
        rest = rest.slice(piece.length);
      }
      line = line === '' ? rest : `${line} ${rest}`;
    }
    return [...lines, indent + line];
  });
}

/** As many whole characters as fit, one at least. */
function leading(text: string, width: number): string {
  let piece = '';
  for (const character of text) {
    if (piece !== '' && textWidth(piece + character) > width) break;
    piece += character;
  }
  return piece;
}

/** A label and a text that hangs beside it: `Why      It rests 4 mm short …`. */
export function hanging(label: string, text: string, { width, style }: Page, indent = 9): readonly string[] {
  const lines = wrapped(spelt(text, style), Math.max(20, width - indent));
  return lines.map((line, k) => `${(k === 0 ? label : '').padEnd(indent)}${line}`.trimEnd());
}

/** A heading with a rule to the edge of the page. */
export function heading(text: string, { width, style }: Page): string {
  const dash = style.unicode ? '─' : '-';
  const left = `${dash.repeat(2)} ${text} `;
  return left + dash.repeat(Math.max(0, width - textWidth(left)));
}

/** Rows set in columns, two blanks between, nothing at the ends of lines; the last column is wrapped to the page. */
export function table(
  said: readonly (readonly string[])[],
  align: readonly ('left' | 'right')[],
  { width, style }: Page,
): readonly string[] {
  const rows = said.map((row) => row.map((cell) => spelt(cell, style)));
  const count = Math.max(0, ...rows.map((row) => row.length));
  const widths = Array.from({ length: count }, (_, k) => Math.max(0, ...rows.map((row) => textWidth(row[k] ?? ''))));
  const before = widths.slice(0, -1).reduce((sum, size) => sum + size + 2, 0);
  const room = Math.max(12, width - before);
  return rows.flatMap((row) => {
    const cells = Array.from({ length: count }, (_, k) => row[k] ?? '');
    const [first = '', ...more] = wrapped(cells.at(-1) ?? '', room);
    const line = [...cells.slice(0, -1), first].map((cell, k) => {
      const blank = ' '.repeat(Math.max(0, Math.min(widths[k] ?? 0, k === count - 1 ? room : width) - textWidth(cell)));
      return align[k] === 'right' ? blank + cell : cell + blank;
    });
    return [line.join('  ').trimEnd(), ...more.map((text) => ' '.repeat(before) + text)];
  });
}

const PLAIN: Readonly<Record<string, string>> = {
  '→': '->',
  '←': '<-',
  '–': '-',
  '—': '-',
  '−': '-',
  '±': '+-',
  '×': 'x',
  '·': ';',
  '≤': '<=',
  '≥': '>=',
  '…': '...',
  '’': "'",
  '‘': "'",
  '“': '"',
  '”': '"',
  '°': ' deg',
  '²': '2',
  '☐': '[ ]',
  '☑': '[x]',
  µ: 'u',
  Ω: 'ohm',
  τ: 'tau',
  ζ: 'zeta',
};

/** A text as the terminal can show it: in ASCII, what has a plain spelling gets it and the rest a question mark. */
export function spelt(text: string, style: Style): string {
  if (style.unicode) return text;
  // Between letters the dot multiplies (%/m·s); between words it parts them.
  const multiplied = text.replaceAll(/(?<=\S)·(?=\S)/gu, '*');
  return multiplied.replaceAll(/[^\u0000-\u007f]/gu, (character) => PLAIN[character] ?? '?');
}

/** Lines as one text, spelt for the terminal. */
export function set(lines: readonly string[], { style }: Page): string {
  return spelt(lines.join('\n'), style);
}
