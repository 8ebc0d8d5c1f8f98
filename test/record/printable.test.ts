import { expect, test } from 'vitest';
import { printable } from '../../src/record/printable.ts';

test('escape sequences, line ends and direction marks cannot reach the terminal', () => {
  // ECMA-48 control sequences; Unicode Standard, bidirectional controls (the list of UAX #9; mem).
  expect(printable('a\u001b[31mb\u009b2Jc')).toBe('a·[31mb·2Jc');
  expect(printable('lift\r\nDROP\u0007\u2028x')).toBe('lift··DROP··x');
  for (const mark of '\u200e\u200f\u061c\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069') {
    expect(printable(`a${mark}b`)).toBe('a·b');
  }
  for (const unseen of ['\u200b', '\u00ad', '\ufeff', '\u2060', '\u3164', '\u{e0041}', '\ud800']) {
    expect(printable(`a${unseen}b`)).toBe('a·b');
  }
});

test('words of any language stay as they are', () => {
  for (const text of ['Aufzug, Höhe [m]', '昇降機', 'μέτρο', '1 ± 0.5 °', '🔧 pit']) expect(printable(text)).toBe(text);
});

test('a long text is cut between characters, never inside one', () => {
  expect(printable('🔧'.repeat(500))).toBe(`${'🔧'.repeat(200)}…`);
});
