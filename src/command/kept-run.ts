import { join } from 'node:path';
import type { Outcome, Proposal, RunHistory, TrialReading, TrialRecord } from '../coach/step.ts';
import { readLogBytes } from '../log/read.ts';
import { writeLog } from '../log/write.ts';
import type { Profile } from '../mechanism/profile.ts';
import {
  type KeptRun,
  type KeptTrial,
  keepTrial,
  logPath,
  openRunOf,
  readTrialLog,
  startRun,
  updateRun,
} from '../profile/run.ts';
import { profileDigest, type Store } from '../profile/store.ts';
import type { Band } from '../record/band.ts';
import type { Permit } from '../safety/gate.ts';
import { figuresDocument } from './documents.ts';
import { readOptionsOf } from './log-options.ts';

/** A run on disk that trials are added to as they happen. */
export interface RunKeeper {
  readonly run: () => KeptRun;
  /** Where its files are, for a person. */
  readonly folder: string;
  /** Trials that the run held when it was opened. */
  readonly resumed: readonly TrialRecord[];
  readonly keep: (record: TrialRecord, proposal: Proposal, permit: Permit | null) => Promise<void>;
  readonly read: (reading: TrialReading) => Promise<void>;
  readonly end: (outcome: Outcome) => Promise<void>;
  /** Why a trial's gains were chosen, and where its log is. */
  readonly told: (trial: number) => { readonly why: string; readonly log: string | null };
}

export interface RunWish {
  /** The plant as it was named: only a run on the same one is resumed. */
  readonly plant: string;
  readonly seed: number;
  readonly maxTrials: number;
  readonly event: string | null;
  /** Start anew even when a run is open. */
  readonly fresh: boolean;
}

/** Resumes the newest open run of this profile on this plant, or starts one. */
export async function openKeeper(store: Store, profile: Profile, wish: RunWish): Promise<RunKeeper> {
  const digest = profileDigest(profile);
  const { fresh, ...start } = wish;
  const open = fresh ? null : await openRunOf(store, profile.name, digest, wish.plant);
  let run = open ?? (await startRun(store, { profile: profile.name, profileDigest: digest, ...start }));
  const resumed = await recordsOf(run, store, profile);
  return {
    run: () => run,
    folder: join(store.folder, 'trials', profile.name, run.id),
    resumed,
    keep: async (record, proposal, permit) => {
      const { trial, stage, outputCap } = record;
      const asked = { trial, stage, gains: { ...record.gains }, move: { ...record.move }, outputCap };
      const band = record.band === null ? null : bandDocument(record.band);
      const unread = { figures: null, verdict: [], inBand: null };
      const signature = permit === null ? null : { ...permit.signature, ticked: [...permit.signature.ticked] };
      const kept = { ...asked, band, why: proposal.why, ...unread, signature };
      run = await keepTrial(store, run, kept, writeLog(record.samples));
    },
    read: async (reading) => {
      run = await updateRun(store, run, (now) => ({
        ...now,
        trials: now.trials.map((kept) =>
          kept.trial === reading.trial ? { ...kept, ...readingDocument(reading) } : kept,
        ),
      }));
    },
    end: async ({ met, stopped, why, gains }) => {
      const outcome = { met, stopped, why, gains: { ...gains } };
      run = await updateRun(store, run, (now) => ({ ...now, status: met ? 'met' : 'stopped', outcome }));
    },
    told: (trial) => {
      const kept = run.trials.find((one) => one.trial === trial);
      return kept ? { why: kept.why, log: logPath(run, kept.log) } : { why: '', log: null };
    },
  };
}

/** The history of a run as the coach wants it. */
export function historyOf(keeper: RunKeeper, profile: Profile): RunHistory {
  const { maxTrials, seed } = keeper.run();
  return { profile, trials: keeper.resumed, maxTrials, minutesLeft: null, seed };
}

/** The trials of a kept run, their logs read and checked. @throws {ProfileError} when a log is gone or changed */
export function recordsOf(run: KeptRun, store: Store, profile: Profile): Promise<readonly TrialRecord[]> {
  return Promise.all(run.trials.map((kept) => recordOf(kept, run, store, profile)));
}

async function recordOf(kept: KeptTrial, run: KeptRun, store: Store, profile: Profile): Promise<TrialRecord> {
  const text = await readTrialLog(store, run, kept);
  const reading = await readLogBytes(new TextEncoder().encode(text), kept.log, readOptionsOf({}, profile, 'needed'));
  const { trial, stage, gains, move, outputCap } = kept;
  return { trial, stage, gains, move, outputCap, samples: reading.samples, band: kept.band && bandOf(kept.band) };
}

const BAND = ['time', 'low', 'middle', 'high'] as const;

function bandDocument(band: Band): NonNullable<KeptTrial['band']> {
  const column = (name: (typeof BAND)[number]) => Array.from(band[name]);
  return { time: column('time'), low: column('low'), middle: column('middle'), high: column('high') };
}

function bandOf(kept: NonNullable<KeptTrial['band']>): Band {
  const column = (name: (typeof BAND)[number]) => Float64Array.from(kept[name]);
  return { time: column('time'), low: column('low'), middle: column('middle'), high: column('high') };
}

function readingDocument({
  figures,
  verdicts,
  inBand,
}: TrialReading): Pick<KeptTrial, 'figures' | 'verdict' | 'inBand'> {
  return { figures: figuresDocument(figures), verdict: verdicts.map(({ is }) => is), inBand };
}
