import { addProfile, openStore, profilePath } from '../profile/store.ts';
import { hanging, set } from '../report/page.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { findProfile, profilesFolder } from './find-profile.ts';

interface NewOptions {
  readonly from: string;
}

export const definition: CommandDefinition = {
  examples: [
    {
      line: 'holdfast new left-lift --from lift',
      does: 'a profile of your own, to fill in with your machine’s numbers',
    },
  ],
  define: (command, runner) => {
    command
      .argument('<name>', 'name of the new profile: a-z, 0-9 and -')
      .requiredOption('--from <profile>', 'what to copy: a starter, a profile, or a path')
      .action((name: string, options: NewOptions) => runner((context) => copy(name, options, context)));
  },
};

/** Copies a profile under a new name into the profiles folder; nothing that is there is overwritten. */
async function copy(name: string, options: NewOptions, context: CommandContext): Promise<ExitCode> {
  const { profile, source } = await findProfile(options.from, context);
  const store = openStore(await profilesFolder(context));
  const file = profilePath(store, name);
  await addProfile(store, { ...profile, name });
  const advice =
    source === 'starter'
      ? 'Its numbers are invented. Enter your machine’s, its limits and its hazards, field by field; what is not known may be null.'
      : 'Check what differs from the one it was copied from.';
  present(context, {
    json: () => ({ format: 'holdfast/new-result@1', profile: name, file, from: profile.name }),
    text: () => {
      const lines = [
        ...hanging('Copied', `${profile.name} to ${file}`, context),
        ...hanging('Next', advice, context),
        ...hanging('', `Then: holdfast tune ${name} --plant sim`, context),
      ];
      return `${set(lines, context)}\n`;
    },
  });
  return EXIT.done;
}
