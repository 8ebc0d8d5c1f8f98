import { Option } from 'commander';
import {
  type Convention,
  conventionOf,
  type GainLine,
  gainLines,
  NoEquivalent,
  toConvention,
} from '../controller/forms.ts';
import { fullOutput, type GainForm, type OutputUnit, type TimeBase } from '../controller/settings.ts';
import { formatNumber } from '../mechanism/quantity.ts';
import { set, table } from '../report/page.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { unusable, wrongUse } from './failure.ts';
import { findProfile } from './find-profile.ts';
import { positive } from './numbers.ts';
import { addGainOptions, gainsTyped, type TypedGains } from './typed-gains.ts';

interface GainsOptions extends TypedGains {
  readonly form?: GainForm;
  readonly timeBase?: TimeBase;
  readonly output?: OutputUnit;
  readonly full?: number;
  readonly period?: number;
}

export const definition: CommandDefinition = {
  examples: [
    {
      line: 'holdfast gains lift --kp 8 --ki 2 --kd 0.3 --form standard',
      does: 'the same gains as one gain and two times',
    },
    {
      line: 'holdfast gains lift --kp 8 --kd 0.3 --time-base ticks --output percent',
      does: 'for code that leaves out dt and works in percent',
    },
  ],
  define: (command, runner) => {
    addGainOptions(
      command
        .argument('<profile>', 'a name in the profiles folder, a path, or a starter')
        .addOption(
          new Option('--form <form>', 'how the other controller combines its terms').choices([
            'parallel',
            'standard',
            'series',
          ]),
        )
        .addOption(
          new Option('--time-base <base>', 'whether it multiplies and divides by dt').choices(['seconds', 'ticks']),
        )
        .addOption(new Option('--output <unit>', 'the unit of its output').choices(['fraction', 'percent', 'volts']))
        .option('--full <n>', 'its full output in that unit, such as 12 for volts', positive)
        .option('--period <s>', 'seconds between its ticks', positive),
    ).action((name: string, options: GainsOptions) => runner((context) => gains(name, options, context)));
  },
};

/** The profile's gains (or those given, in the profile's own convention) as another controller writes them. */
async function gains(name: string, options: GainsOptions, context: CommandContext): Promise<ExitCode> {
  const { profile } = await findProfile(name, context);
  const canonical = gainsTyped(options, profile);
  const own = conventionOf(profile.controller);
  const outputUnit = options.output ?? own.outputUnit;
  const convention: Convention = {
    form: options.form ?? own.form,
    timeBase: options.timeBase ?? own.timeBase,
    outputUnit,
    fullOutput:
      options.full ?? fullIn(outputUnit, own, profile.supply?.openCircuit ?? profile.motor?.nominalVoltage ?? null),
    period: options.period ?? own.period,
  };
  if (convention.period !== own.period) {
    context.edge.err('Another period is another loop: these gains were not proven at it.\n');
  }
  let entries: readonly GainLine[];
  try {
    entries = gainLines(toConvention(canonical, fullOutput(profile.controller), convention), convention, profile.unit);
  } catch (error) {
    if (error instanceof NoEquivalent) throw unusable(error.message, error.remedy);
    throw error;
  }
  present(context, {
    json: () => ({
      format: 'holdfast/gains-result@1',
      profile: profile.name,
      canonical,
      convention,
      entered: Object.fromEntries(entries.map(({ label, value, unit }) => [label, { value, unit }])),
    }),
    text: () => set(gainsLines(entries, convention, fullOutput(profile.controller), context), context),
  });
  return EXIT.done;
}

/** Full output in a unit: what the profile says where it is the same unit, 1 or 100, or the supply for volts. */
function fullIn(unit: OutputUnit, own: Convention, volts: number | null): number {
  if (unit === own.outputUnit) return own.fullOutput;
  if (unit === 'fraction') return 1;
  if (unit === 'percent') return 100;
  if (volts !== null) return volts;
  throw wrongUse('How many volts full output is, is not known.', 'Say it with --full, such as --full 12.');
}

function gainsLines(
  entries: readonly GainLine[],
  convention: Convention,
  own: number,
  page: CommandContext,
): readonly string[] {
  const { form, timeBase, outputUnit, fullOutput: full, period } = convention;
  const head = `${form} form, times in ${timeBase}${timeBase === 'ticks' ? ` of ${period} s` : ''}, output as ${outputUnit} up to ${full}`;
  const rows = entries.map(({ label, value, unit }) => [
    `  ${label}`,
    value === null ? 'off' : formatNumber(value, 5),
    unit,
  ]);
  const note = full === own ? [] : ['', `Full output ${full} there is full output ${own} in the profile.`];
  return [head, ...table(rows, ['left', 'right', 'left'], page), ...note, ''];
}
