import { spawn } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync, utimesSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { writeLog } from '../../src/log/write.ts';
import { profileText } from '../../src/profile/document.ts';
import { ProfileError } from '../../src/profile/error.ts';
import {
  keepTrial,
  listRuns,
  type NewTrial,
  openRunOf,
  readTrialLog,
  startRun,
  updateRun,
} from '../../src/profile/run.ts';
import { openSettings } from '../../src/profile/settings.ts';
import {
  addProfile,
  listProfiles,
  openStore,
  profileDigest,
  readProfile,
  tidyStore,
  updateProfile,
} from '../../src/profile/store.ts';
import type { Samples } from '../../src/record/samples.ts';
import { samplesOf } from '../fixtures/second-order.ts';
import { starter } from '../fixtures/starters.ts';

const saver = fileURLToPath(new URL('../fixtures/store/saver.ts', import.meta.url));
let folder = '';

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'holdfast-store-'));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

const counted = () => ({ ...starter('lift'), notes: '0' });
const start = (times: string) =>
  spawn(process.execPath, ['--import', 'tsx', saver, folder, 'lift', times], { stdio: ['ignore', 'pipe', 'inherit'] });

const log: Samples = samplesOf({ time: [0, 0.02, 0.04], measured: [0, 0.1, 0.3], setpoint: 1, output: [1, 0.5, 0.25] });
const trial: NewTrial = {
  trial: 1,
  stage: 'ready',
  gains: { kp: 1, ki: 0, kd: 0, zone: null, hold: 0, pace: 0 },
  move: { from: 0, to: 1 },
  outputCap: 0.4,
  band: null,
  why: 'to see',
  figures: null,
  verdict: [],
  inBand: null,
  signature: null,
};

describe('a folder of profiles', () => {
  test('keeps, lists and refuses to overwrite', async () => {
    const store = openStore(folder);
    await addProfile(store, starter('lift'));
    await addProfile(store, starter('arm'));
    expect((await listProfiles(store)).map(({ name }) => name)).toEqual(['arm', 'lift']);
    expect((await readProfile(store, 'lift')).profile).toEqual(starter('lift'));
    await expect(addProfile(store, starter('lift'))).rejects.toMatchObject({ fault: 'exists' });
  });

  test('names that would leave the folder are refused', async () => {
    for (const name of ['../lift', 'a/b', '', 'Lift', 'x'.repeat(41)]) {
      await expect(readProfile(openStore(folder), name)).rejects.toMatchObject({ fault: 'name' });
    }
  });

  test('a file that cannot be used is listed with the reason, and left to the byte', async () => {
    const store = openStore(folder);
    const newer = profileText(starter('lift')).replace('profile@1', 'profile@7');
    writeFileSync(join(folder, 'lift.json'), newer);
    writeFileSync(join(folder, 'arm.json'), '{ "format": ');
    const listed = await listProfiles(store);
    expect(listed.map(({ error }) => error?.fault)).toEqual(['not-json', 'newer-format']);
    await expect(updateProfile(store, 'lift', (profile) => profile)).rejects.toBeInstanceOf(ProfileError);
    await expect(addProfile(store, starter('lift'))).rejects.toMatchObject({ fault: 'exists' });
    expect(readFileSync(join(folder, 'lift.json'), 'utf8')).toBe(newer);
    expect(readFileSync(join(folder, 'arm.json'), 'utf8')).toBe('{ "format": ');
  });

  test('a change that would not read back is refused before anything is written', async () => {
    const store = openStore(folder);
    const { digest } = await addProfile(store, starter('lift'));
    await expect(
      updateProfile(store, 'lift', (profile) => ({ ...profile, limits: { ...profile.limits, outputCap: 7 } })),
    ).rejects.toMatchObject({ fault: 'field' });
    expect((await readProfile(store, 'lift')).digest).toBe(digest);
  });

  test('old temporary files are swept, young ones and others are not', async () => {
    const old = join(folder, '.holdfast-0123456789ab.tmp');
    writeFileSync(old, 'x');
    writeFileSync(join(folder, '.holdfast-ba9876543210.tmp'), 'x');
    writeFileSync(join(folder, 'notes.tmp'), 'x');
    const now = Date.now();
    utimesSync(old, now / 1000 - 600, now / 1000 - 600);
    await tidyStore(openStore(folder), now);
    expect(readdirSync(folder).sort()).toEqual(['.holdfast-ba9876543210.tmp', 'notes.tmp']);
  });
});

describe('two processes', () => {
  test('that count at once lose no update', async () => {
    await addProfile(openStore(folder), counted());
    const runs = [start('40'), start('40')];
    await Promise.all(runs.map((child) => new Promise((resolve) => child.on('close', resolve))));
    expect((await readProfile(openStore(folder), 'lift')).profile.notes).toBe('80');
  });
});

describe('a process killed in the middle of saves', () => {
  test('leaves the old or the new document, never neither, and its lock is taken over', async () => {
    const store = openStore(folder);
    await addProfile(store, counted());
    let last = 0;
    for (let round = 0; round < 6; round++) {
      const child = start('forever');
      await new Promise<void>((resolve) => {
        let seen = 0;
        child.stdout.on('data', (piece: Buffer) => {
          seen += piece.length;
          if (seen > 3 + 7 * round) {
            child.kill('SIGKILL');
            resolve();
          }
        });
      });
      await new Promise((resolve) => child.on('close', resolve));
      const { profile } = await readProfile(store, 'lift');
      expect(Number(profile.notes)).toBeGreaterThan(last);
      last = Number(profile.notes);
      // The dead process cannot renew its lock; age it as eleven seconds would.
      const lock = join(folder, '.holdfast-lock');
      try {
        utimesSync(lock, Date.now() / 1000 - 11, Date.now() / 1000 - 11);
      } catch {
        // It had just let go.
      }
    }
    await updateProfile(store, 'lift', (profile) => ({ ...profile, title: 'still writable' }));
    expect((await readProfile(store, 'lift')).profile.title).toBe('still writable');
  });
});

describe('a run', () => {
  const open = {
    profile: 'lift',
    profileDigest: profileDigest(starter('lift')),
    plant: 'sim',
    seed: 1,
    maxTrials: 12,
    event: null,
  };

  test('is found again where it was, with its logs checked by digest', async () => {
    const store = openStore(folder);
    const run = await keepTrial(store, await startRun(store, open), trial, writeLog(log));
    expect(await openRunOf(store, 'lift', open.profileDigest, 'sim')).toEqual(run);
    const kept = run.trials[0];
    if (!kept) throw new Error('one trial was kept');
    expect(await readTrialLog(store, run, kept)).toBe(writeLog(log));
    const path = join(folder, 'trials', 'lift', run.id, kept.log);
    writeFileSync(path, readFileSync(path, 'utf8').replace('0.3', '0.4'));
    await expect(readTrialLog(store, run, kept)).rejects.toMatchObject({ fault: 'damaged' });
  });

  test('is not resumed after its end, on another plant, or after the profile has changed', async () => {
    const store = openStore(folder);
    const run = await startRun(store, open);
    expect(await openRunOf(store, 'lift', open.profileDigest, 'log:other.csv')).toBeNull();
    expect(await openRunOf(store, 'lift', 'another digest', 'sim')).toBeNull();
    await updateRun(store, run, (now) => ({ ...now, status: 'met' }));
    expect(await openRunOf(store, 'lift', open.profileDigest, 'sim')).toBeNull();
    const second = await startRun(store, open);
    expect((await listRuns(store, 'lift')).map(({ id }) => id)).toEqual([second.id, run.id]);
  });
});

describe('settings', () => {
  test('come back, and a file that does not parse is set aside, not reset in silence', () => {
    const settings = openSettings(folder);
    settings.write({ event: 'Saturday' });
    expect(openSettings(folder).read().event).toBe('Saturday');
    writeFileSync(join(folder, 'settings.json'), '{ half');
    const again = openSettings(folder);
    expect(again.warning).toMatch(/set aside/);
    expect(again.read().event).toBeNull();
    expect(readFileSync(join(folder, 'settings.json.unreadable'), 'utf8')).toBe('{ half');
  });
});
