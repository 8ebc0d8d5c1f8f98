import { createHash, randomBytes } from 'node:crypto';
import { mkdir, open, readdir, readFile, rename, rm, stat } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { lock } from 'proper-lockfile';
import { ProfileError } from './error.ts';

/** Left behind by a process that was killed in the middle of a write; older than this, s, it is swept away. */
const TEMPORARY = /^\.holdfast-[0-9a-f]{12}\.tmp$/;
const SWEEP_AFTER = 60;

/**
 * Writes a file so that at any moment, power cuts included, either the old or the new content is there: temporary file in the
 * same folder, fsync, rename, fsync of the folder.
 */
export async function writeDurably(path: string, text: string): Promise<void> {
  const folder = dirname(path);
  await mkdir(folder, { recursive: true });
  const temporary = join(folder, `.holdfast-${randomBytes(6).toString('hex')}.tmp`);
  try {
    const file = await open(temporary, 'wx');
    try {
      await file.writeFile(text);
      await file.sync();
    } finally {
      await file.close();
    }
    await rename(temporary, path);
    await syncFolder(folder);
  } catch (error) {
    await rm(temporary, { force: true }).catch(() => undefined);
    throw diskError(error, path);
  }
}

async function syncFolder(folder: string): Promise<void> {
  // Windows cannot open a folder; there the rename itself is the best that can be had.
  if (process.platform === 'win32') return;
  const handle = await open(folder, 'r');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

/** Content of a file, null when there is none. @throws {ProfileError} when it cannot be read */
export async function readIfThere(path: string): Promise<string | null> {
  try {
    return await readFile(path, 'utf8');
  } catch (error) {
    if (codeOf(error) === 'ENOENT' || codeOf(error) === 'ENOTDIR') return null;
    throw diskError(error, path);
  }
}

/**
 * Runs something while no other process may do the same in this folder. A lock left by a killed process is taken over
 * after ten seconds without a sign of life.
 */
export async function withLock<T>(folder: string, run: () => Promise<T>): Promise<T> {
  try {
    await mkdir(folder, { recursive: true });
  } catch (error) {
    throw diskError(error, folder);
  }
  let release: () => Promise<void>;
  try {
    release = await lock(folder, {
      lockfilePath: join(folder, '.holdfast-lock'),
      realpath: true,
      stale: 10_000,
      update: 2_000,
      retries: { retries: 200, factor: 1.2, minTimeout: 5, maxTimeout: 120, randomize: true },
    });
  } catch (error) {
    if (codeOf(error) === 'ELOCKED') {
      throw new ProfileError(
        'busy',
        'another Holdfast has held this folder for a long time.',
        'Close it, or wait and try again.',
        { file: folder },
      );
    }
    throw diskError(error, folder);
  }
  try {
    return await run();
  } finally {
    await release().catch(() => undefined);
  }
}

/** Removes temporary files that a killed process left long ago. */
export async function sweepTemporaries(folder: string, now: number): Promise<void> {
  const names = await readdir(folder).catch(() => []);
  for (const name of names.filter((one) => TEMPORARY.test(one))) {
    const path = join(folder, name);
    const age = await stat(path).then(
      ({ mtimeMs }) => (now - mtimeMs) / 1000,
      () => 0,
    );
    if (age > SWEEP_AFTER) await rm(path, { force: true }).catch(() => undefined);
  }
}

/** SHA-256 of a text, in hexadecimal. */
export function digestOf(text: string): string {
  return createHash('sha256').update(text).digest('hex');
}

function codeOf(error: unknown): string {
  return typeof error === 'object' && error !== null && 'code' in error ? String(error.code) : '';
}

function diskError(error: unknown, path: string): unknown {
  if (error instanceof ProfileError) return error;
  const file = basename(path);
  switch (codeOf(error)) {
    case 'EACCES':
    case 'EPERM':
    case 'EROFS':
      return new ProfileError(
        'disk',
        'it may not be read or written here.',
        'Check the permissions of the folder, or name another with --profiles DIR.',
        { file },
      );
    case 'ENOSPC':
    case 'EDQUOT':
      return new ProfileError('disk', 'the disk is full; the old file is as it was.', 'Make room and save again.', {
        file,
      });
    case 'EISDIR':
      return new ProfileError('unreadable', 'this is a folder, not a file.', 'Move it away.', { file });
    case 'ENOTDIR':
    case 'EEXIST':
      return new ProfileError(
        'disk',
        'a file is in the way of a folder of this name.',
        'Move it away, or name another folder with --profiles DIR.',
        { file },
      );
    default:
      return error;
  }
}
