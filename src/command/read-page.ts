import { drawChart } from '../chart/draw.ts';
import { outputChart, trialChart } from '../chart/trial-chart.ts';
import type { LogReading } from '../log/read.ts';
import type { LoggedMove } from '../log/split.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { moveText, percent, seconds } from '../report/amounts.ts';
import { figuresTable } from '../report/figures.ts';
import { hanging, heading, type Page, set, table, wrapped } from '../report/page.ts';
import { verdictLines } from '../report/verdicts.ts';
import type { Reading } from '../trial/reading.ts';
import { columnsText } from './log-options.ts';
import { CHART_ROWS } from './trial-page.ts';

/** One move of a log with what it shows. */
export interface ReadMove {
  readonly move: LoggedMove;
  readonly reading: Reading;
}

/** A log that was read, and what it was read as. */
export interface ReadPage {
  readonly log: LogReading;
  readonly moves: readonly ReadMove[];
  readonly profile: Profile;
  /** True = the profile is the mechanism's own, with a target to meet. */
  readonly own: boolean;
  /** Puts a text into words for a log that names no unit. */
  readonly say: (text: string) => string;
  readonly assumed: readonly string[];
}

/** More moves than this are listed; one of them is drawn on request. */
const MOST_DRAWN = 4;

/**
 * The log for a person: the answer first, then how the file was understood, then each move.
 *
 * @param only number of the one move to show, from 1; null = all, or a list of them when there are many
 */
export function readText(read: ReadPage, only: number | null, page: Page): string {
  const { log, moves, say } = read;
  const often = log.period > 0 ? `, ${formatNumber(1 / log.period, 3)} rows a second` : '';
  const notes = [...log.repairs, ...log.warnings, ...read.assumed];
  const shown = moves
    .map((one, k) => ({ one, number: k + 1 }))
    .filter(({ number }) => only === null || number === only);
  const parts =
    shown.length <= MOST_DRAWN
      ? shown.flatMap(({ one, number }) => ['', ...moveLines(one, number, read, page)])
      : listLines(read, page);
  const lines = [
    ...wrapped(`${log.file}: ${say(headline(moves))}`, page.width),
    '',
    ...wrapped(`${log.rows} rows over ${formatNumber(log.duration, 3)} s${often}.`, page.width),
    ...wrapped(columnsText(log), page.width),
    ...notes.flatMap((note) => hanging('Note', note, page)),
    ...parts,
    '',
  ];
  return set(lines, page);
}

/** The answer in a line or two: what weighs most in each move. */
function headline(moves: readonly ReadMove[]): string {
  const most = ({ reading }: ReadMove) => reading.verdicts[0]?.because ?? 'Nothing out of the ordinary.';
  const [only] = moves;
  if (only && moves.length === 1) return most(only);
  const settled = moves.filter(({ reading }) => reading.figures.settlingTime !== null).length;
  const count = `${settled} of ${moves.length} moves settled.`;
  if (moves.length > MOST_DRAWN) return count;
  return [count, ...moves.map((one, k) => `Move ${k + 1}: ${most(one)}`)].join(' ');
}

function listLines({ log, moves, profile, say }: ReadPage, page: Page): readonly string[] {
  const rows = moves.map(({ move, reading }, k) => {
    const { settlingTime, overshoot } = reading.figures;
    return [
      String(k + 1),
      `${formatNumber(log.samples.time[move.start] ?? 0, 4)} s`,
      say(moveText(move, profile)),
      settlingTime === null ? 'never' : seconds(settlingTime),
      percent(overshoot),
      reading.verdicts.map(({ is }) => is).join(', '),
    ];
  });
  const head = ['move', 'at', 'from and to', 'settles', 'past', 'verdict'];
  const listed = table([head, ...rows], ['right', 'right', 'left', 'right', 'right', 'left'], page);
  return ['', ...listed, '', 'Show one with --move N.'];
}

const OUTPUT_AXIS = { fraction: 'of full', percent: '%', volts: 'V' } as const;
const OUTPUT_ROWS = 9;

function moveLines(
  { move, reading }: ReadMove,
  number: number,
  { log, profile, own, say }: ReadPage,
  page: Page,
): readonly string[] {
  const { width, style } = page;
  const starts = formatNumber(log.samples.time[move.start] ?? 0, 3);
  const chart = trialChart(move.samples, {
    title: 'measured against setpoint',
    unit: say(`1 ${profile.unit}`).slice(2),
    band: null,
    tolerance: profile.target.tolerance,
    to: move.to,
    width,
    height: CHART_ROWS,
    span: null,
  });
  const outputUnit = OUTPUT_AXIS[profile.controller.output.unit];
  const output = outputChart(move.samples, { width, height: OUTPUT_ROWS, span: null, unit: outputUnit });
  const verdicts = reading.verdicts.map((verdict) => ({ ...verdict, because: say(verdict.because) }));
  return [
    heading(say(`Move ${number} · ${moveText(move, profile)} · from ${starts} s`), page),
    ...drawChart(chart, style),
    ...(output === null ? [] : drawChart(output, style)),
    '',
    say(figuresTable(reading.figures, profile, own ? 'target' : 'nothing', page)),
    '',
    verdictLines(verdicts, page),
  ];
}
