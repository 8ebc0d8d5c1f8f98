import type { Style } from '../chart/spec.ts';
import type { Edge } from './edge.ts';

/** What a person said about drawing on the command line. */
export interface StyleWish {
  readonly ascii: boolean;
  /** False = --no-colour. */
  readonly colour: boolean;
}

/**
 * How to draw here: colour only on a terminal that has it and whose owner did not refuse it (NO_COLOR with any value
 * that is not empty, TERM=dumb, --no-colour); lines and symbols beyond ASCII only where the locale says UTF-8.
 *
 * Source: the NO_COLOR convention (no-color.org, mem); POSIX, "Environment variables": LC_ALL over LC_CTYPE over LANG.
 */
export function styleOf(wish: StyleWish, edge: Pick<Edge, 'env' | 'terminal'>): Style {
  const { env, terminal } = edge;
  const dumb = env.TERM === 'dumb';
  const refusesColour = (env.NO_COLOR ?? '') !== '';
  return {
    colour: wish.colour && terminal.output && !dumb && !refusesColour,
    unicode: !wish.ascii && !dumb && speaksUnicode(env),
  };
}

function speaksUnicode(env: Edge['env']): boolean {
  // Windows terminals say it in their own way: the newer one names its session, editors name themselves.
  if (env.WT_SESSION || env.TERM_PROGRAM === 'vscode') return true;
  const locale = env.LC_ALL || env.LC_CTYPE || env.LANG || '';
  return /utf-?8/i.test(locale);
}

/** Columns that a page may use: the terminal's, within what a chart can be read at. */
export function pageWidth(edge: Pick<Edge, 'terminal'>): number {
  return Math.min(160, Math.max(40, edge.terminal.output ? edge.terminal.columns : 80));
}
