import stringWidth from 'string-width';
import { expect, test } from 'vitest';
import { textWidth } from '../../src/record/text-width.ts';

// The reference is string-width, which the console's renderer uses.
test.each([
  'Two-stage lift',
  'Hubwerk, zweistufig – äöüß',
  '─┤╭╮╰╯│┄░╌·',
  '0.031 → 0.045 m/s² · 12 µs ±4 °',
  'リフト二段',
  '승강기',
  'e\u0301le\u0301vateur',
  'подъёмник',
  'ｆｕｌｌ',
  '🚧 keep out',
  '',
])('%s takes as many columns as string-width says', (text) => {
  expect(textWidth(text)).toBe(stringWidth(text));
});
