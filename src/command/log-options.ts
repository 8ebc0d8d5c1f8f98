import { type Command, InvalidArgumentError, Option } from 'commander';
import type { OutputUnit } from '../controller/settings.ts';
import type { Column, Columns } from '../log/columns.ts';
import { ROLES, type Role } from '../log/headers.ts';
import { type LogReading, PLAIN_READ, type ReadOptions } from '../log/read.ts';
import { POSITION_UNITS, type Profile, SPEED_UNITS, type Unit } from '../mechanism/profile.ts';
import { printable } from '../record/printable.ts';

/** How a person says what a log's columns are. */
export interface LogOptions {
  readonly column?: Readonly<Partial<Record<Role, string>>>;
  readonly unit?: Unit;
  readonly outputUnit?: OutputUnit;
  readonly repair?: true;
}

/** Lays the options on a command that reads logs. */
export function addLogOptions(command: Command): Command {
  return command
    .option('--column <role=header>', 'which column is time, setpoint, measured or output; repeatable', collectColumn)
    .addOption(
      new Option('--unit <unit>', 'true unit of the readings, where the header is silent or wrong').choices([
        ...POSITION_UNITS,
        ...SPEED_UNITS,
      ]),
    )
    .addOption(new Option('--output-unit <unit>', 'true unit of the output').choices(['fraction', 'percent', 'volts']))
    .option('--repair', 'drop rows that go back in time or lack a number, and say how many');
}

function collectColumn(text: string, before: LogOptions['column'] = {}): LogOptions['column'] {
  const [role = '', ...header] = text.split('=');
  if (!(ROLES as readonly string[]).includes(role) || header.join('=') === '') {
    throw new InvalidArgumentError(`Write ROLE=HEADER, with one of ${ROLES.join(', ')} as the role.`);
  }
  return { ...before, [role]: header.join('=') };
}

/** What to read a log with: the options, and the profile's units when there is one. */
export function readOptionsOf(
  options: LogOptions,
  profile: Profile | null,
  setpoint: ReadOptions['setpoint'],
): ReadOptions {
  return {
    ...PLAIN_READ,
    columns: options.column ?? {},
    unit: profile?.unit ?? null,
    logUnit: options.unit ?? null,
    outputUnit: profile?.controller.output.unit ?? null,
    logOutputUnit: options.outputUnit ?? null,
    quantity: profile?.quantity ?? null,
    rows: options.repair === true ? 'repaired' : 'as-they-are',
    setpoint,
  };
}

const SHOWN = ['time', 'setpoint', 'measured', 'output'] as const satisfies readonly Role[];

/** The four columns as results name them. */
export function columnsDocument(columns: Columns): Readonly<Record<string, unknown>> {
  const described = (column: Column | null) =>
    column === null ? null : { header: column.header, unit: column.unit, scale: column.scale };
  return Object.fromEntries(SHOWN.map((role) => [role, described(columns[role])]));
}

/** How a log was understood, for a person: each role with its column, and how to overrule a guess. */
export function columnsText(reading: LogReading): string {
  const columns = SHOWN.map((role) => {
    const column = reading.columns[role];
    if (column === null) return `${role}: none`;
    const scaled = column.scale === 1 || !Number.isFinite(column.scale) ? '' : ` × ${column.scale}`;
    return `${role} ${column.how === 'told' ? '=' : '←'} "${printable(column.header)}"${scaled}`;
  });
  return `Columns  ${columns.join(' · ')}`;
}
