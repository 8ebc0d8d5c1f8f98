import { readFile } from 'node:fs/promises';
import { basename, dirname, isAbsolute, join, resolve } from 'node:path';
import type { Profile } from '../mechanism/profile.ts';
import { parseProfile } from '../profile/document.ts';
import { ProfileError } from '../profile/error.ts';
import { listProfiles, openStore, readProfile, type Store } from '../profile/store.ts';
import type { CommandContext } from './command.ts';

/** A profile that a person named, where it was found, and where its trials are kept. */
export interface FoundProfile {
  readonly profile: Profile;
  readonly store: Store;
  /** A starter is invented: fit for a simulation, never for a machine. */
  readonly source: 'folder' | 'path' | 'starter';
}

/** The folder of profiles: as told with --profiles, as set, or the usual one in the user's data folder. */
export async function profilesFolder(context: CommandContext): Promise<string> {
  if (context.profiles !== null) return resolve(context.edge.cwd, context.profiles);
  const { openSettings } = await import('../profile/settings.ts');
  const settings = openSettings();
  if (settings.warning !== null) context.edge.err(`${settings.warning}\n`);
  return settings.read().profiles ?? settings.folder;
}

/**
 * Finds a profile by its name in the profiles folder, by a path (anything with a slash or a .json), or among the starters,
 * in this order.
 *
 * @throws {ProfileError} when there is none, or it cannot be used
 */
export async function findProfile(word: string, context: CommandContext): Promise<FoundProfile> {
  if (/[/\\]|\.json$/i.test(word)) return profileAt(word, context);
  const store = openStore(await profilesFolder(context));
  try {
    return { profile: (await readProfile(store, word)).profile, store, source: 'folder' };
  } catch (error) {
    if (!(error instanceof ProfileError) || error.fault !== 'missing') throw error;
    const starter = await starterNamed(word);
    if (starter !== null) return { profile: starter, store, source: 'starter' };
    throw await nothingNamed(word, store);
  }
}

/** The starters that ship with Holdfast, by name. */
export async function starters(): Promise<readonly Profile[]> {
  const { starterFolder } = await import('../profile/settings.ts');
  const listed = await listProfiles(openStore(starterFolder()));
  return listed.flatMap(({ stored }) => (stored === null ? [] : [stored.profile]));
}

async function starterNamed(name: string): Promise<Profile | null> {
  return (await starters()).find((starter) => starter.name === name) ?? null;
}

async function profileAt(word: string, context: CommandContext): Promise<FoundProfile> {
  const path = isAbsolute(word) ? word : join(context.edge.cwd, word);
  const profile = parseProfile(await textAt(path, word), basename(path));
  const folder = context.profiles === null ? dirname(path) : await profilesFolder(context);
  return { profile, store: openStore(folder), source: 'path' };
}

async function textAt(path: string, word: string): Promise<string> {
  try {
    return await readFile(path, 'utf8');
  } catch (error) {
    const code = error instanceof Error && 'code' in error ? error.code : '';
    if (code === 'ENOENT')
      throw new ProfileError('missing', 'there is no such file.', 'Check the path.', { file: word });
    if (code === 'EISDIR') {
      throw new ProfileError(
        'unreadable',
        'this is a folder.',
        'Name a profile in it, or the folder with --profiles.',
        {
          file: word,
        },
      );
    }
    if (code === 'EACCES' || code === 'EPERM') {
      throw new ProfileError('unreadable', 'it may not be read.', 'Check its permissions.', { file: word });
    }
    throw error;
  }
}

async function nothingNamed(word: string, store: Store): Promise<ProfileError> {
  const kept = (await listProfiles(store)).map(({ name }) => name);
  const ships = (await starters()).map(({ name }) => name);
  const here = kept.length === 0 ? `${store.folder} holds none yet` : `${store.folder} holds ${kept.join(', ')}`;
  return new ProfileError(
    'missing',
    `there is no profile "${word}": ${here}.`,
    `Starters are ${ships.join(', ')}. Copy one with: holdfast new NAME --from STARTER`,
  );
}
