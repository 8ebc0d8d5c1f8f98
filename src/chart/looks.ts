import type { Line, Style } from './spec.ts';

/** How each kind of line looks: a glyph that tells it apart without colour, in Unicode and in ASCII, and an SGR colour. */
interface Look {
  readonly unicode: string;
  readonly ascii: string;
  /** SGR parameters, of the 16 colours; the curve keeps the terminal's own colour, so that it is read on light and dark. */
  readonly colour: string;
  readonly shape: 'curve' | 'dots';
}

export const LOOKS: Readonly<Record<Line['role'], Look>> = {
  tolerance: { unicode: '┄', ascii: '.', colour: '90', shape: 'dots' },
  band: { unicode: '░', ascii: ':', colour: '36', shape: 'dots' },
  promise: { unicode: '·', ascii: "'", colour: '36', shape: 'dots' },
  setpoint: { unicode: '═', ascii: '=', colour: '33', shape: 'dots' },
  other: { unicode: 'o', ascii: 'o', colour: '34', shape: 'dots' },
  d: { unicode: 'd', ascii: 'd', colour: '36', shape: 'dots' },
  i: { unicode: 'i', ascii: 'i', colour: '35', shape: 'dots' },
  p: { unicode: 'p', ascii: 'p', colour: '33', shape: 'dots' },
  output: { unicode: '─', ascii: '*', colour: '1', shape: 'curve' },
  measured: { unicode: '─', ascii: '*', colour: '1', shape: 'curve' },
};

/** What is laid over what: the first lies at the bottom. */
export const LAYERS: readonly Line['role'][] = [
  'band',
  'tolerance',
  'promise',
  'setpoint',
  'other',
  'd',
  'i',
  'p',
  'output',
  'measured',
];

export function glyphOf(role: Line['role'], style: Style): string {
  return style.unicode ? LOOKS[role].unicode : LOOKS[role].ascii;
}

/** A text in a colour that ends with it; as it is where there is no colour. */
export function coloured(text: string, colour: string, style: Style): string {
  return style.colour && colour !== '' && text !== '' ? `\u001b[${colour}m${text}\u001b[0m` : text;
}
