import { existsSync, renameSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import Conf from 'conf';

/** What this person has set on this laptop. */
export interface Settings {
  /** Folder of the profiles; null = beside these settings. */
  readonly profiles: string | null;
  readonly event: string | null;
  /** When the next run begins, ms since the epoch. */
  readonly queueAt: number | null;
  readonly plain: boolean;
}

export interface OpenSettings {
  readonly read: () => Settings;
  readonly write: (change: Partial<Settings>) => void;
  /** Where the profiles are kept by default. */
  readonly folder: string;
  /** Said once when a settings file that does not parse was set aside. */
  readonly warning: string | null;
}

const DEFAULTS: Settings = { profiles: null, event: null, queueAt: null, plain: false };

/** Opens the settings in the user's data folder. A file that does not parse is set aside under another name and reported. */
export function openSettings(cwd?: string): OpenSettings {
  const open = () =>
    new Conf<{ -readonly [K in keyof Settings]: Settings[K] }>({
      projectName: 'holdfast',
      projectSuffix: '',
      configName: 'settings',
      defaults: DEFAULTS,
      accessPropertiesByDotNotation: false,
      clearInvalidConfig: false,
      ...(cwd === undefined ? {} : { cwd }),
    });
  let warning: string | null = null;
  let conf: ReturnType<typeof open>;
  try {
    conf = open();
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    const path = settingsPath(cwd);
    const aside = `${path}.unreadable`;
    if (existsSync(path)) renameSync(path, aside);
    warning = `The settings did not parse; they were set aside as ${aside}.`;
    conf = open();
  }
  return {
    read: () => ({ ...DEFAULTS, ...conf.store }),
    write: (change) => conf.set({ ...conf.store, ...change }),
    folder: join(dirname(conf.path), 'profiles'),
    warning,
  };
}

function settingsPath(cwd: string | undefined): string {
  if (cwd !== undefined) return join(cwd, 'settings.json');
  // conf does not tell its path when its file does not parse: a second, empty name in the same folder does.
  const probe = new Conf({ projectName: 'holdfast', projectSuffix: '', configName: 'settings-probe' });
  return join(dirname(probe.path), 'settings.json');
}

/** The folder of the starter mechanisms that ship with Holdfast, from the sources and from the bundle alike. */
export function starterFolder(): string {
  const here = dirname(fileURLToPath(import.meta.url));
  const candidates = [join(here, '..', 'profiles'), join(here, '..', '..', 'profiles')];
  // From the sources `../profiles` would be this very room; it holds no lift.
  return candidates.find((folder) => existsSync(join(folder, 'lift.json'))) ?? join(here, '..', 'profiles');
}
