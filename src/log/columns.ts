import type { OutputUnit } from '../controller/settings.ts';
import type { Unit } from '../mechanism/profile.ts';
import { unitScale } from '../mechanism/units.ts';
import { printable } from '../record/printable.ts';
import { LogError } from './error.ts';
import { knownUnit, NAMES, partsOf, plain, ROLES, type Role } from './headers.ts';
import type { Layout } from './layout.ts';

/** Where a quantity was found and what its numbers are multiplied by. */
export interface Column {
  readonly header: string;
  /** 0-based. */
  readonly index: number;
  /** Unit as the header has it; null when it names none. */
  readonly unit: string | null;
  readonly scale: number;
  readonly how: 'told' | 'guessed';
}

export type Columns = Readonly<Record<Role, Column | null>>;

/** What is known of the log from outside it. */
export interface ColumnRequest {
  /** Header or 1-based number of a column, by role. */
  readonly told: Readonly<Partial<Record<Role, string>>>;
  /** The profile's unit; null = keep what the log has. */
  readonly unit: Unit | null;
  /** Unit of the log's measured columns where a person knows better than its header. */
  readonly logUnit: Unit | null;
  readonly outputUnit: OutputUnit | null;
  /** Unit of the log's output where a person knows better. */
  readonly logOutputUnit: OutputUnit | null;
  readonly quantity: 'position' | 'speed' | null;
}

const TIME_SCALES: Readonly<Record<string, number>> = {
  s: 1,
  sec: 1,
  secs: 1,
  seconds: 1,
  ms: 1e-3,
  us: 1e-6,
  µs: 1e-6,
  μs: 1e-6,
  ns: 1e-9,
  min: 60,
};

/**
 * Finds the columns of a log: those that were told, the others by their headers.
 *
 * @throws {LogError} when a told column does not exist, the time or the measured column cannot be found, or units do not fit
 */
export function columnsOf(
  layout: Layout,
  request: ColumnRequest,
  name: string,
): { readonly columns: Columns; readonly warnings: readonly string[] } {
  const warnings: string[] = [];
  const taken = new Set<number>();
  const found = new Map<Role, number>();
  const told = new Set<Role>();
  for (const role of ROLES) {
    const wish = request.told[role];
    if (wish === undefined) continue;
    const index = indexOf(layout.headers, wish);
    if (index < 0) {
      throw new LogError(
        'unknown-column',
        `it has no column "${printable(wish)}".`,
        `Its columns are: ${listed(layout.headers)}.`,
        { file: name, field: printable(wish) },
      );
    }
    found.set(role, index);
    told.add(role);
    taken.add(index);
  }
  for (const role of ROLES) {
    if (found.has(role)) continue;
    const index = guess(layout, role, request, taken, found);
    if (index === null) continue;
    found.set(role, index);
    taken.add(index);
  }
  const column = (role: Role): Column | null => {
    const index = found.get(role);
    if (index === undefined) return null;
    const header = layout.headers[index] ?? '';
    const unit = partsOf(header).unit ?? (layout.unitRow?.[index]?.replace(/[[\]()]/g, '').trim() || null);
    return {
      header,
      index,
      unit,
      scale: scaleOf(role, unit, request, name, header, warnings),
      how: told.has(role) ? 'told' : 'guessed',
    };
  };
  for (const role of ['time', 'measured'] as const) {
    if (!found.has(role)) {
      throw new LogError(
        'no-column',
        `no column was recognised as ${role}.`,
        `Name it with --column ${role}=HEADER. Its columns are: ${listed(layout.headers)}.`,
        { file: name },
      );
    }
  }
  const columns = Object.fromEntries(ROLES.map((role) => [role, column(role)])) as Record<Role, Column | null>;
  return { columns, warnings };
}

function indexOf(headers: readonly string[], wish: string): number {
  const exact = headers.indexOf(wish);
  if (exact >= 0) return exact;
  const loose = headers.findIndex((header) => plain(header) === plain(wish) || partsOf(header).name === plain(wish));
  if (loose >= 0) return loose;
  const number = /^\d+$/.test(wish) ? Number(wish) - 1 : -1;
  return number < headers.length ? number : -1;
}

const listed = (headers: readonly string[]): string => headers.slice(0, 30).map(printable).join(', ');

/** Best header for a role that nothing else has taken. */
function guess(
  layout: Layout,
  role: Role,
  request: ColumnRequest,
  taken: ReadonlySet<number>,
  found: ReadonlyMap<Role, number>,
): number | null {
  let best: number | null = null;
  let most = 0;
  layout.headers.forEach((header, index) => {
    if (taken.has(index)) return;
    const score = scoreFor(role, header, request, layout, found);
    if (score > most) {
      most = score;
      best = index;
    }
  });
  return best;
}

function scoreFor(
  role: Role,
  header: string,
  request: ColumnRequest,
  layout: Layout,
  found: ReadonlyMap<Role, number>,
): number {
  const { name, unit } = partsOf(header);
  const names = NAMES[role];
  const exact = names.findIndex((known) => plain(known) === name);
  const words = name.split(' ');
  const single = role === 'p' || role === 'i' || role === 'd';
  const partly = single ? -1 : names.findIndex((known) => known.length > 1 && words.includes(known));
  if (exact < 0 && partly < 0) return 0;
  const base = exact >= 0 ? 100 - exact : 50 - partly;
  if (role !== 'measured') return base;
  // Of several readings, the one in the setpoint's unit, or of the loop's own quantity.
  const setpoint = found.get('setpoint');
  const wanted = setpoint === undefined ? null : partsOf(layout.headers[setpoint] ?? '').unit;
  const speedLike =
    /speed|vel|rpm/.test(name) ||
    (unit !== null && knownUnit(unit) !== null && unitScale(knownUnit(unit) ?? 'm').perSecond);
  const fits =
    (wanted !== null && unit === wanted ? 60 : 0) +
    (request.quantity !== null && (request.quantity === 'speed') === speedLike ? 30 : 0);
  return base + fits;
}

function scaleOf(
  role: Role,
  unit: string | null,
  request: ColumnRequest,
  name: string,
  header: string,
  warnings: string[],
): number {
  if (role === 'time') return unit === null ? Number.NaN : (TIME_SCALES[unit.toLowerCase()] ?? Number.NaN);
  if (role === 'setpoint' || role === 'measured') return measuredScale(unit, request, name, header, warnings);
  if (role === 'output' || role === 'p' || role === 'i' || role === 'd')
    return outputScale(unit, request, name, header);
  return 1;
}

function measuredScale(
  unit: string | null,
  request: ColumnRequest,
  name: string,
  header: string,
  warnings: string[],
): number {
  const from = request.logUnit ?? (unit === null ? null : knownUnit(unit));
  if (unit !== null && from === null)
    warnings.push(
      `Column "${printable(header)}": unit "${printable(unit)}" is not known; its numbers are taken as they are.`,
    );
  if (request.unit === null || from === null) return 1;
  const a = unitScale(from);
  const b = unitScale(request.unit);
  if (a.dimension !== b.dimension || a.perSecond !== b.perSecond) {
    throw new LogError(
      'unit',
      `column "${printable(header)}" is in ${from}, the profile in ${request.unit}: they do not measure the same thing.`,
      'Choose the right column with --column measured=HEADER, or say its true unit with --unit.',
      { file: name, field: printable(header) },
    );
  }
  return from === request.unit ? 1 : a.toSi / b.toSi;
}

const OUTPUT_WORDS: Readonly<Record<string, OutputUnit>> = {
  v: 'volts',
  volt: 'volts',
  volts: 'volts',
  '%': 'percent',
  pct: 'percent',
  percent: 'percent',
  fraction: 'fraction',
  '': 'fraction',
  '-': 'fraction',
};

function outputScale(unit: string | null, request: ColumnRequest, name: string, header: string): number {
  const from = request.logOutputUnit ?? (unit === null ? null : (OUTPUT_WORDS[unit.toLowerCase()] ?? null));
  const to = request.outputUnit;
  if (from === null || to === null || from === to) return 1;
  if (from === 'percent' && to === 'fraction') return 0.01;
  if (from === 'fraction' && to === 'percent') return 100;
  throw new LogError(
    'unit',
    `column "${printable(header)}" is in ${from}, the profile's output in ${to}: there is no fixed ratio between them.`,
    'Log the output in the profile’s unit, set controller.output in the profile, or say what it really is with --output-unit.',
    { file: name, field: printable(header) },
  );
}
