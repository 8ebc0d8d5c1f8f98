import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';
import { documentText, parseDocument } from './document.ts';
import { ProfileError } from './error.ts';
import { digestOf, readIfThere, withLock, writeDurably } from './files.ts';
import type { Store } from './store.ts';

/** holdfast/run@1: one pass through the stages, kept after every trial so that it resumes where it was. */
const RUN_FORMAT = 'holdfast/run@1';

const gains = z.looseObject({
  kp: z.number(),
  ki: z.number(),
  kd: z.number(),
  zone: z.number().nullable(),
  hold: z.number(),
  pace: z.number(),
});
const figure = z.number().nullable();

const signature = z.looseObject({
  name: z.string(),
  ticked: z.array(z.string()),
  at: z.number(),
  outputCap: z.number(),
  profileDigest: z.string(),
});

const keptTrial = z.looseObject({
  trial: z.number().int(),
  stage: z.enum(['ready', 'proportional', 'integral', 'derivative', 'proof']),
  gains,
  move: z.looseObject({ from: z.number(), to: z.number() }),
  outputCap: z.number(),
  /** File name of its log, beside the run's own file. */
  log: z.string().regex(/^[0-9a-z-]+\.csv$/),
  digest: z.string(),
  /** The band it was promised: time, low, middle, high; null when nothing was. */
  band: z
    .looseObject({
      time: z.array(z.number()),
      low: z.array(z.number()),
      middle: z.array(z.number()),
      high: z.array(z.number()),
    })
    .nullable(),
  why: z.string(),
  figures: z.record(z.string(), figure).nullable(),
  verdict: z.array(z.string()),
  inBand: z.boolean().nullable(),
  signature: signature.nullable(),
});

const runSchema = z.looseObject({
  format: z.literal(RUN_FORMAT),
  id: z.string().regex(/^[0-9a-z-]{1,60}$/),
  profile: z.string(),
  /** Digest of the profile the run was started with: a changed profile starts a new run. */
  profileDigest: z.string(),
  plant: z.string(),
  seed: z.number(),
  maxTrials: z.number().int(),
  event: z.string().nullable(),
  status: z.enum(['open', 'met', 'stopped']),
  trials: z.array(keptTrial),
  outcome: z.looseObject({ met: z.boolean(), stopped: z.string(), why: z.string(), gains }).nullable(),
});

export type KeptRun = z.infer<typeof runSchema>;
export type KeptTrial = z.infer<typeof keptTrial>;

/** What a run is started with. */
export type RunStart = Pick<KeptRun, 'profile' | 'profileDigest' | 'plant' | 'seed' | 'maxTrials' | 'event'>;

/** A trial as it is handed over to be kept: all but the file and digest of its log. */
export type NewTrial = Pick<
  KeptTrial,
  'trial' | 'stage' | 'gains' | 'move' | 'outputCap' | 'band' | 'why' | 'figures' | 'verdict' | 'inBand' | 'signature'
>;

const runsFolder = (store: Store, profile: string) => join(store.folder, 'trials', profile);
const runPath = (store: Store, run: Pick<KeptRun, 'profile' | 'id'>) =>
  join(runsFolder(store, run.profile), run.id, 'run.json');

/** Path of a trial's log, relative to the store's folder, with forward slashes. */
export function logPath(run: Pick<KeptRun, 'profile' | 'id'>, log: string): string {
  return `trials/${run.profile}/${run.id}/${log}`;
}

/** Runs of a profile, newest first (ids count up). Those that cannot be read are left out. */
export async function listRuns(store: Store, profile: string): Promise<readonly KeptRun[]> {
  const entries = await readdir(runsFolder(store, profile), { withFileTypes: true }).catch(() => []);
  const ids = entries
    .filter((entry) => entry.isDirectory())
    .map((entry) => entry.name)
    .sort()
    .reverse();
  const runs = await Promise.all(ids.map((id) => readRun(store, profile, id).catch(() => null)));
  return runs.filter((run) => run !== null);
}

/** @throws {ProfileError} when it is missing or cannot be used */
async function readRun(store: Store, profile: string, id: string): Promise<KeptRun> {
  const path = runPath(store, { profile, id });
  const text = await readIfThere(path);
  const file = `trials/${profile}/${id}/run.json`;
  if (text === null) throw new ProfileError('missing', 'there is no such run.', 'Start a new one.', { file });
  const checked = runSchema.safeParse(parseDocument(text, file, RUN_FORMAT));
  if (checked.success) return checked.data;
  const issue = checked.error.issues[0];
  throw new ProfileError(
    'field',
    `${issue?.path.join('.') ?? ''}: ${issue?.message ?? 'not as expected'}.`,
    'The run was written by something else or damaged; start a new one with --fresh.',
    { file },
  );
}

/** The newest open run of a profile on a plant; null when there is none, or when the profile has changed since. */
export async function openRunOf(
  store: Store,
  profile: string,
  profileDigest: string,
  plant: string,
): Promise<KeptRun | null> {
  const runs = await listRuns(store, profile);
  return (
    runs.find((run) => run.status === 'open' && run.plant === plant && run.profileDigest === profileDigest) ?? null
  );
}

/** Starts a run under the next free number. */
export async function startRun(store: Store, start: RunStart): Promise<KeptRun> {
  return withLock(store.folder, async () => {
    const entries = await readdir(runsFolder(store, start.profile)).catch(() => []);
    const last = entries
      .map((name) => /^run-(\d+)$/.exec(name)?.[1])
      .reduce((most, digits) => Math.max(most, Number(digits ?? 0)), 0);
    const run: KeptRun = {
      format: RUN_FORMAT,
      id: `run-${String(last + 1).padStart(4, '0')}`,
      ...start,
      status: 'open',
      trials: [],
      outcome: null,
    };
    await writeDurably(runPath(store, run), documentText(run));
    return run;
  });
}

/** Keeps a trial: its log first, then the run that names it. */
export async function keepTrial(store: Store, run: KeptRun, trial: NewTrial, logText: string): Promise<KeptRun> {
  const log = `${String(trial.trial).padStart(3, '0')}-${trial.stage}.csv`;
  return withLock(store.folder, async () => {
    await writeDurably(join(runsFolder(store, run.profile), run.id, log), logText);
    const now = await readRun(store, run.profile, run.id);
    const kept: KeptTrial = { ...trial, log, digest: digestOf(logText) };
    const after: KeptRun = { ...now, trials: [...now.trials.filter((one) => one.trial !== trial.trial), kept] };
    await writeDurably(runPath(store, run), documentText(after));
    return after;
  });
}

/** Changes a run's record under the lock: its readings after a trial, its end. */
export async function updateRun(store: Store, run: KeptRun, change: (run: KeptRun) => KeptRun): Promise<KeptRun> {
  return withLock(store.folder, async () => {
    const after = change(await readRun(store, run.profile, run.id));
    await writeDurably(runPath(store, run), documentText(after));
    return after;
  });
}

/** A kept trial's log, checked against its digest. @throws {ProfileError} when a byte of it has changed */
export async function readTrialLog(store: Store, run: KeptRun, trial: KeptTrial): Promise<string> {
  const file = logPath(run, trial.log);
  const text = await readIfThere(join(store.folder, file));
  if (text === null)
    throw new ProfileError(
      'missing',
      'the log of this trial is gone.',
      'Restore it from a copy, or start a new run with --fresh.',
      { file },
    );
  if (digestOf(text) !== trial.digest) {
    throw new ProfileError(
      'damaged',
      'the log is not the one that was recorded: its digest differs.',
      'Restore it from a copy, or start a new run with --fresh.',
      { file },
    );
  }
  return text;
}
