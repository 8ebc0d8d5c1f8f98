import type { Profile } from '../mechanism/profile.ts';
import { listProfiles, openStore } from '../profile/store.ts';
import { gainsLine } from '../report/gains.ts';
import { hanging, type Page, set, table } from '../report/page.ts';
import { type CommandContext, type CommandDefinition, present } from './command.ts';
import { EXIT, type ExitCode } from './edge.ts';
import { explain } from './explain.ts';
import { profilesFolder, starters } from './find-profile.ts';

export const definition: CommandDefinition = {
  examples: [
    { line: 'holdfast profiles', does: 'what is in the profiles folder, and the starters' },
    { line: 'holdfast profiles --profiles robot/holdfast', does: 'of a folder that lives beside the robot’s code' },
  ],
  define: (command, runner) => {
    command.action(() => runner(profiles));
  },
};

/** Every profile of the folder with what it is, and the starters to copy from. */
async function profiles(context: CommandContext): Promise<ExitCode> {
  const folder = await profilesFolder(context);
  const listed = await listProfiles(openStore(folder));
  const ships = await starters();
  const untuned = ({ gains }: Profile) => gains.kp === 0 && gains.ki === 0 && gains.kd === 0 && gains.pace === 0;
  present(context, {
    json: () => ({
      format: 'holdfast/profiles-result@1',
      folder,
      profiles: listed.map(({ name, stored, error }) =>
        stored === null
          ? { name, title: null, kind: null, quantity: null, unit: null, gains: null, error: explain(error).message }
          : { ...facts(stored.profile), gains: stored.profile.gains, error: null },
      ),
      starters: ships.map(facts),
    }),
    text: () => {
      const rows = listed.map(({ name, stored, error }) =>
        stored === null
          ? [name, `cannot be read: ${explain(error).message}`]
          : [
              name,
              stored.profile.title,
              untuned(stored.profile) ? 'no gains yet' : gainsLine(stored.profile.gains, stored.profile),
            ],
      );
      const own =
        rows.length === 0 ? ['  none yet: holdfast new NAME --from STARTER copies one'] : indented(rows, context);
      const kinds = ships.map(({ name, title, kind, quantity }) => [name, title, `${kind}, ${quantity}`]);
      const text = [
        ...hanging('In', folder, context, 3),
        ...own,
        '',
        'Starters, invented, to copy from',
        ...indented(kinds, context),
        '',
      ];
      return set(text, context);
    },
  });
  return EXIT.done;
}

const indented = (rows: readonly (readonly string[])[], page: Page) =>
  table(
    rows.map(([name = '', ...more]) => [`  ${name}`, ...more]),
    ['left', 'left', 'left'],
    page,
  );

const facts = ({ name, title, kind, quantity, unit }: Profile) => ({ name, title, kind, quantity, unit });
