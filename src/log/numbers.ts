/** A cell's number, NaN when it is missing or stands for none, null when it is no number at all. */
export function numberOf(cell: string, decimal: '.' | ','): number | null {
  let text = cell;
  if (decimal === ',' && text.includes(',')) text = text.replace(',', '.');
  const value = Number(text);
  if (value !== 0) {
    if (!Number.isNaN(value))
      return Number.isFinite(value) && !/[xob]/i.test(text) ? value : Number.isFinite(value) ? null : Number.NaN;
    return wordOf(text);
  }
  // Number('') and Number('  ') are 0, and so are hexadecimal zeros.
  const trimmed = text.trim();
  if (trimmed === '') return Number.NaN;
  return /[xob]/i.test(trimmed) ? null : value;
}

function wordOf(text: string): number | null {
  const word = text.trim().toLowerCase();
  if (word === 'true' || word === 'on' || word === 'enabled') return 1;
  if (word === 'false' || word === 'off' || word === 'disabled') return 0;
  return /^[+-]?(nan|inf|infinity|na|null|none|-)$/.test(word) ? Number.NaN : null;
}

/** A column of numbers that grows by doubling. */
export interface Growing {
  readonly push: (value: number) => void;
  readonly length: () => number;
  /** The numbers so far, as a column of their own. */
  readonly take: () => Float64Array;
  readonly clear: () => void;
  /** Drops the last one. */
  readonly pop: () => void;
}

export function growing(): Growing {
  let held = new Float64Array(1024);
  let count = 0;
  return {
    push: (value) => {
      if (count === held.length) {
        const wider = new Float64Array(2 * count);
        wider.set(held);
        held = wider;
      }
      held[count++] = value;
    },
    length: () => count,
    take: () => held.slice(0, count),
    clear: () => {
      count = 0;
    },
    pop: () => {
      count = Math.max(0, count - 1);
    },
  };
}
