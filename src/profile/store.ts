import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import type { Profile } from '../mechanism/profile.ts';
import { printable } from '../record/printable.ts';
import { parseProfile, profileText } from './document.ts';
import { ProfileError } from './error.ts';
import { digestOf, readIfThere, sweepTemporaries, withLock, writeDurably } from './files.ts';

/** A folder of profiles. Every file in it is plain text that can be kept under version control. */
export interface Store {
  readonly folder: string;
}

/** A profile as it was read, with the digest of its file: what an update must still find. */
export interface StoredProfile {
  readonly profile: Profile;
  readonly digest: string;
}

/** One line of a list: the profile, or why it cannot be read. */
export type ListedProfile =
  | { readonly name: string; readonly stored: StoredProfile; readonly error: null }
  | { readonly name: string; readonly stored: null; readonly error: ProfileError };

const NAME = /^[a-z0-9-]{1,40}$/;

export function openStore(folder: string): Store {
  return { folder };
}

/** @throws {ProfileError} for a name that is none: it would name a file elsewhere */
export function profilePath(store: Store, name: string): string {
  if (!NAME.test(name)) {
    throw new ProfileError('name', `"${printable(name)}" is no profile name.`, 'Names are 1 to 40 of a-z, 0-9 and -.', {
      field: 'name',
    });
  }
  return join(store.folder, `${name}.json`);
}

/** All profiles of a folder by name; those that cannot be read say why. An absent folder holds none. */
export async function listProfiles(store: Store): Promise<readonly ListedProfile[]> {
  const entries = await readdir(store.folder, { withFileTypes: true }).catch(() => []);
  const names = entries
    .filter((entry) => !entry.isDirectory() && /^[a-z0-9-]{1,40}\.json$/.test(entry.name))
    .map((entry) => entry.name.slice(0, -5));
  return Promise.all(
    names.sort().map(async (name): Promise<ListedProfile> => {
      try {
        return { name, stored: await readProfile(store, name), error: null };
      } catch (error) {
        if (error instanceof ProfileError) return { name, stored: null, error };
        throw error;
      }
    }),
  );
}

/** @throws {ProfileError} when it is missing or cannot be used */
export async function readProfile(store: Store, name: string): Promise<StoredProfile> {
  const text = await readIfThere(profilePath(store, name));
  if (text === null) {
    throw new ProfileError(
      'missing',
      `there is no profile "${name}" in ${store.folder}.`,
      'See the list with `holdfast profiles`, or copy a starter with `holdfast new NAME --from STARTER`.',
      { file: `${name}.json` },
    );
  }
  const profile = parseProfile(text, `${name}.json`);
  if (profile.name !== name) {
    throw new ProfileError(
      'name',
      `it calls itself "${printable(profile.name)}".`,
      `Rename the file to ${printable(profile.name)}.json, or its name to "${name}".`,
      { file: `${name}.json`, field: 'name' },
    );
  }
  return { profile, digest: digestOf(text) };
}

/** Adds a profile. @throws {ProfileError} when one of this name is there already */
export async function addProfile(store: Store, profile: Profile): Promise<StoredProfile> {
  const path = profilePath(store, profile.name);
  return withLock(store.folder, async () => {
    if ((await readIfThere(path)) !== null) {
      throw new ProfileError('exists', `there is a profile "${profile.name}" already.`, 'Choose another name.', {
        file: `${profile.name}.json`,
      });
    }
    return write(path, profile);
  });
}

/**
 * Changes a profile: reads what is there now, under the lock, and writes what `change` makes of it. Two consoles that change
 * different fields both keep their work.
 */
export async function updateProfile(
  store: Store,
  name: string,
  change: (profile: Profile) => Profile,
): Promise<StoredProfile> {
  const path = profilePath(store, name);
  return withLock(store.folder, async () => {
    const before = await readProfile(store, name);
    const after = change(before.profile);
    if (after.name !== name)
      throw new ProfileError('name', 'a change cannot rename a profile.', 'Copy it under the new name.', {
        field: 'name',
      });
    return write(path, after);
  });
}

/** Clears what killed processes left behind. @param now ms since the epoch */
export async function tidyStore(store: Store, now: number): Promise<void> {
  await sweepTemporaries(store.folder, now);
}

/** Digest of a profile as it would be kept. */
export function profileDigest(profile: Profile): string {
  return digestOf(profileText(profile));
}

async function write(path: string, profile: Profile): Promise<StoredProfile> {
  const text = profileText(profile);
  // What is written is checked as what is read: nothing that could not be read back reaches the disk.
  parseProfile(text, `${profile.name}.json`);
  await writeDurably(path, text);
  return { profile, digest: digestOf(text) };
}
