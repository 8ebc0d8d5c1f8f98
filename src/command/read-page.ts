import { drawChart } from '../chart/draw.ts';
import { outputChart, trialChart } from '../chart/trial-chart.ts';
import type { LogReading } from '../log/read.ts';
import type { LoggedMove } from '../log/split.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';
import type { Reading } from '../trial/reading.ts';
import type { CommandContext } from './command.ts';
import { figureLines } from './figures-text.ts';
import { columnsText } from './log-options.ts';
import { columned, hanging, heading, wrapped } from './page.ts';

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
export function readText(page: ReadPage, only: number | null, context: CommandContext): string {
  const { log, moves, say } = page;
  const { width } = context;
  const often = log.period > 0 ? `, ${formatNumber(1 / log.period, 3)} rows a second` : '';
  const notes = [...log.repairs, ...log.warnings, ...page.assumed];
  const shown = moves
    .map((one, k) => ({ one, number: k + 1 }))
    .filter(({ number }) => only === null || number === only);
  const drawn = shown.length <= MOST_DRAWN;
  return [
    ...wrapped(`${log.file}: ${say(headline(moves))}`, width),
    '',
    ...wrapped(`${log.rows} rows over ${formatNumber(log.duration, 3)} s${often}.`, width),
    ...wrapped(columnsText(log), width),
    ...notes.map((note) => hanging('Note', note, width)),
    ...(drawn
      ? shown.flatMap(({ one, number }) => ['', ...moveLines(one, number, page, context)])
      : listLines(page, context)),
    '',
  ].join('\n');
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

const amountIn = (profile: Profile) => (value: number) =>
  formatQuantity(value, profile.unit, profile.sensor?.resolution ?? 0);

function listLines({ log, moves, profile, say }: ReadPage, { width }: CommandContext): readonly string[] {
  const amount = amountIn(profile);
  const rows = moves.map(({ move, reading }, k) => {
    const { settlingTime, overshoot } = reading.figures;
    return [
      String(k + 1),
      `${formatNumber(log.samples.time[move.start] ?? 0, 4)} s`,
      say(`${amount(move.from)} → ${amount(move.to)}`),
      settlingTime === null ? 'never' : `${formatNumber(settlingTime, 2)} s`,
      `${formatNumber(overshoot, 2)} %`,
      reading.verdicts.map(({ is }) => is).join(', '),
    ];
  });
  const head = ['move', 'from', 'of', 'settles', 'past', 'verdict'];
  return [
    '',
    ...columned([head, ...rows], ['right', 'right', 'left', 'right', 'right', 'left']).map((line) => clip(line, width)),
    '',
    'Show one with --move N.',
  ];
}

const clip = (line: string, width: number) => (line.length > width ? `${line.slice(0, width - 1)}…` : line);

const OUTPUT_AXIS = { fraction: 'of full', percent: '%', volts: 'V' } as const;
const CHART_ROWS = 15;
const OUTPUT_ROWS = 9;

function moveLines(
  { move, reading }: ReadMove,
  number: number,
  { log, profile, own, say }: ReadPage,
  { width, style }: CommandContext,
): readonly string[] {
  const amount = amountIn(profile);
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
  return [
    heading(say(`Move ${number} · ${amount(move.from)} → ${amount(move.to)} · from ${starts} s`), width, style),
    ...drawChart(chart, style),
    ...(output === null ? [] : drawChart(output, style)),
    '',
    ...figureLines(reading.figures, profile, own ? 'target' : 'nothing').map(say),
    '',
    ...verdictLines(reading.verdicts, say, width),
  ];
}

function verdictLines(verdicts: Reading['verdicts'], say: ReadPage['say'], width: number): readonly string[] {
  if (verdicts.length === 0) return ['Verdict  nothing out of the ordinary'];
  return verdicts.map(({ is, because }, k) => hanging(k === 0 ? 'Verdict' : '', `${is}: ${say(because)}`, width));
}
