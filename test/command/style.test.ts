import { expect, test } from 'vitest';
import type { Environment } from '../../src/command/edge.ts';
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
