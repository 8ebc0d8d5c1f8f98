/** Ranges of characters that take two columns: East Asian Wide and Fullwidth, and pictographs (Unicode, UAX #11). */
const WIDE: readonly (readonly [first: number, last: number])[] = [
  [0x1100, 0x115f],
  [0x2e80, 0x303e],
  [0x3041, 0xa4cf],
  [0xa960, 0xa97c],
  [0xac00, 0xd7a3],
  [0xf900, 0xfaff],
  [0xfe30, 0xfe6f],
  [0xff01, 0xff60],
  [0xffe0, 0xffe6],
  [0x1f300, 0x1f64f],
  [0x1f680, 0x1f6ff],
  [0x1f900, 0x1f9ff],
  [0x20000, 0x3fffd],
];

/** Marks that stand on the character before, and format characters that are not seen. */
const UNSEEN = /^[\p{Mn}\p{Me}\p{Cf}]$/u;

/**
 * Columns that a printable text takes in a terminal. Counts character by character: good for titles, names and units in any
 * script; joined emoji count each of their parts. A library that segments graphemes takes longer to load than the whole
 * program may take to start.
 */
export function textWidth(text: string): number {
  let columns = 0;
  for (const character of text) {
    const code = character.codePointAt(0) ?? 0;
    if (code < 0x300) columns += 1;
    else if (WIDE.some(([first, last]) => code >= first && code <= last)) columns += 2;
    else if (!UNSEEN.test(character)) columns += 1;
  }
  return columns;
}
