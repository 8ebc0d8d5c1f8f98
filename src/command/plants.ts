import { learn } from '../learn/learn.ts';
import { readLogBytes } from '../log/read.ts';
import { plantWith } from '../mechanism/plant-of.ts';
import type { Profile } from '../mechanism/profile.ts';
import { readingOf, simulatedMechanismOf } from '../trial/simulate.ts';
import type { CommandContext } from './command.ts';
import { unusable, wrongUse } from './failure.ts';
import { readOptionsOf } from './log-options.ts';
import { openLog } from './open-log.ts';
import { poweredCommand, simulatedCommand } from './outside-plant.ts';
import type { TrialPlant } from './run-trials.ts';
import { simulatedPlant } from './sim-plant.ts';
import { splitWords } from './words.ts';

/** A plant as a person names it. */
export type PlantWish =
  | { readonly kind: 'sim' }
  | { readonly kind: 'log'; readonly file: string }
  | { readonly kind: 'cmd'; readonly line: string; readonly words: readonly string[] };

/** What stands behind `--plant`. @throws {Failure} when it is none of the three; @throws {UnclosedQuote} */
export function plantWish(text: string): PlantWish {
  if (text === 'sim') return { kind: 'sim' };
  if (text.startsWith('log:') && text.length > 4) return { kind: 'log', file: text.slice(4) };
  if (text.startsWith('cmd:')) {
    const line = text.slice(4);
    const words = splitWords(line);
    if (words.length > 0 && words[0] !== '') return { kind: 'cmd', line, words };
  }
  throw wrongUse(
    `--plant ${text}: there is no such plant.`,
    'Use sim (the profile’s physics), log:FILE (a model fitted to a log) or cmd:COMMAND (a simulator or rig).',
  );
}

/** The profile's own physics as a plant. @throws {Failure} where the machine's numbers are missing */
export function physicsPlant(profile: Profile, seed: number): TrialPlant {
  const mechanism = simulatedMechanismOf(profile);
  if (mechanism === null) {
    throw unusable(
      `the profile "${profile.name}" lacks numbers of the machine, so there is nothing to simulate.`,
      'Fill in motor, drive and load; or tune on a log of it with --plant log:FILE.',
      { file: `${profile.name}.json`, field: 'motor' },
    );
  }
  return simulatedPlant(mechanism, profile, seed);
}

/** A response model fitted to a log as a plant. @throws {LogError}; @throws {Failure} when the log teaches too little */
export async function fittedPlant(
  file: string,
  profile: Profile,
  seed: number,
  context: CommandContext,
): Promise<TrialPlant> {
  const reading = await openLog(file, readOptionsOf({}, profile, 'optional'), context);
  const evidence = { samples: reading.samples, gains: null, outputCap: profile.limits.outputCap, move: null };
  const learnt = learn({ profile, trials: [evidence], draws: 16, seed });
  for (const warning of learnt.warnings) context.edge.err(`${file}: ${warning}\n`);
  if (!learnt.usable) {
    throw unusable(
      'the log does not carry a model that trials could be simulated on.',
      'Look at it with: holdfast fit LOG',
      {
        file,
      },
    );
  }
  return simulatedPlant({ plant: plantWith(profile, learnt.response), reading: readingOf(profile) }, profile, seed);
}

/** A command as a plant, powered or vouched for as a simulation; contracts, section 3. */
export function commandPlant(
  words: readonly string[],
  profile: Profile,
  how: { readonly timeout: number; readonly simulated: boolean },
  context: CommandContext,
): TrialPlant {
  const make = how.simulated ? simulatedCommand : poweredCommand;
  return make({
    words,
    profile,
    timeout: how.timeout,
    edge: context.edge,
    readLog: async (bytes, name) => (await readLogBytes(bytes, name, readOptionsOf({}, profile, 'needed'))).samples,
  });
}
