import type { Style } from '../chart/spec.ts';
import { textWidth } from '../record/text-width.ts';

/** Breaks a text at blanks into lines of at most `width` columns; a word that is longer stands alone. Indents are kept. */
export function wrapped(text: string, width: number): readonly string[] {
  return text.split('\n').flatMap((paragraph) => {
    const indent = /^ */.exec(paragraph)?.[0] ?? '';
    const lines: string[] = [];
    let line: string | null = null;
    for (const word of paragraph.slice(indent.length).split(' ')) {
      if (line !== null && textWidth(line) + 1 + textWidth(word) > width) {
        lines.push(line);
        line = null;
      }
      line = line === null ? indent + word : `${line} ${word}`;
    }
    return [...lines, line ?? ''];
  });
}

/** A label and a text that hangs beside it: `Why     It rests 4 mm short …`. */
export function hanging(label: string, text: string, width: number, indent = 9): string {
  const lines = wrapped(text, Math.max(20, width - indent));
  return lines.map((line, k) => `${k === 0 ? label.padEnd(indent) : ' '.repeat(indent)}${line}`.trimEnd()).join('\n');
}

/** A heading with a rule to the edge of the page. */
export function heading(text: string, width: number, style: Style): string {
  const dash = style.unicode ? '─' : '-';
  const left = `${dash.repeat(2)} ${text} `;
  return left + dash.repeat(Math.max(0, width - textWidth(left)));
}

/** Rows in columns: the first flush left, the others as `align` says, two blanks between. */
export function columned(
  rows: readonly (readonly string[])[],
  align: readonly ('left' | 'right')[],
): readonly string[] {
  const count = Math.max(0, ...rows.map((row) => row.length));
  const widths = Array.from({ length: count }, (_, k) => Math.max(0, ...rows.map((row) => textWidth(row[k] ?? ''))));
  return rows.map((row) =>
    row
      .map((cell, k) => {
        const blank = ' '.repeat(Math.max(0, (widths[k] ?? 0) - textWidth(cell)));
        return align[k] === 'right' ? blank + cell : cell + blank;
      })
      .join('  ')
      .trimEnd(),
  );
}

const PLAIN: Readonly<Record<string, string>> = {
  '→': '->',
  '←': '<-',
  '↔': '<->',
  '–': '-',
  '—': '-',
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
  µ: 'u',
  Ω: 'ohm',
  ω: 'w',
  τ: 'tau',
  ζ: 'zeta',
};

/** The page as this terminal can show it: in ASCII, what has a plain spelling gets it and the rest a question mark. */
export function spelt(text: string, style: Style): string {
  if (style.unicode) return text;
  return text.replaceAll(/[^\u0000-\u007f]/g, (character) => PLAIN[character] ?? '?');
}
