import { expect, test } from 'vitest';
import type { Environment } from '../../src/command/edge.ts';
import { columned, hanging, heading, spelt, wrapped } from '../../src/command/page.ts';
import { pageWidth, styleOf } from '../../src/command/style.ts';

const terminal = { input: true, output: true, errors: true, columns: 120, rows: 40 };
const wish = { ascii: false, colour: true };
const style = (env: Environment, output = true, asked = wish) =>
  styleOf(asked, { env, terminal: { ...terminal, output } });

test('colour and Unicode on a UTF-8 terminal', () => {
  expect(style({ LANG: 'en_GB.UTF-8' })).toEqual({ colour: true, unicode: true });
});

test('NO_COLOR with any value, --no-colour, TERM=dumb and a pipe each take colour away', () => {
  expect(style({ LANG: 'C.UTF-8', NO_COLOR: '1' }).colour).toBe(false);
  // The convention: "when present and not an empty string".
  expect(style({ LANG: 'C.UTF-8', NO_COLOR: '' }).colour).toBe(true);
  expect(style({ LANG: 'C.UTF-8' }, true, { ...wish, colour: false }).colour).toBe(false);
  expect(style({ LANG: 'C.UTF-8', TERM: 'dumb' })).toEqual({ colour: false, unicode: false });
  expect(style({ LANG: 'C.UTF-8' }, false)).toEqual({ colour: false, unicode: true });
});

test('the locale decides on Unicode: LC_ALL over LC_CTYPE over LANG', () => {
  expect(style({ LC_ALL: 'C', LANG: 'en_GB.UTF-8' }).unicode).toBe(false);
  expect(style({ LC_CTYPE: 'de_DE.utf8', LANG: 'C' }).unicode).toBe(true);
  expect(style({}).unicode).toBe(false);
  expect(style({ WT_SESSION: 'x' }).unicode).toBe(true);
  expect(style({ LANG: 'C.UTF-8' }, true, { ...wish, ascii: true }).unicode).toBe(false);
});

test('a page is as wide as the terminal, and 80 columns when piped', () => {
  expect(pageWidth({ terminal })).toBe(120);
  expect(pageWidth({ terminal: { ...terminal, output: false } })).toBe(80);
  expect(pageWidth({ terminal: { ...terminal, columns: 12 } })).toBe(40);
});

test('texts wrap at blanks, keep their indent, and never cut a word', () => {
  expect(wrapped('one two three four', 9)).toEqual(['one two', 'three', 'four']);
  expect(wrapped('  a bb ccc', 6)).toEqual(['  a bb', '  ccc']);
  expect(wrapped('unbreakable', 4)).toEqual(['unbreakable']);
  expect(wrapped('', 10)).toEqual(['']);
  expect(hanging('Why', 'it rests short of the target', 30)).toBe('Why      it rests short of the\n         target');
});

test('a heading fills the width, columns line up', () => {
  expect(heading('Trial 1', 20, { colour: false, unicode: false })).toBe('-- Trial 1 ---------');
  expect(
    columned(
      [
        ['a', '1.5'],
        ['bbb', '22'],
      ],
      ['left', 'right'],
    ),
  ).toEqual(['a    1.5', 'bbb   22']);
});

test('plain ASCII has a spelling for what Holdfast prints, and a mark for what it cannot', () => {
  expect(spelt('0.2 → 1 m · “lift” ±4 °/s ≤ 2 Ω', { colour: false, unicode: false })).toBe(
    '0.2 -> 1 m ; "lift" +-4  deg/s <= 2 ohm',
  );
  expect(spelt('リ', { colour: false, unicode: false })).toBe('?');
});
