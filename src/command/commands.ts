import type { ListedCommand } from './command.ts';

/** Every command, in the order of the help page. A new command is a file and a line here. */
export const COMMANDS: readonly ListedCommand[] = [
  {
    name: 'demo',
    summary: 'a complete guided run on a simulated mechanism, with nothing to set up',
    load: async () => (await import('./demo.ts')).definition,
  },
  {
    name: 'tune',
    summary: 'from no gains to proven gains in few trials, without a person',
    load: async () => (await import('./tune.ts')).definition,
  },
  {
    name: 'read',
    summary: 'what a logged trial shows: figures, what is wrong, chart',
    load: async () => (await import('./read.ts')).definition,
  },
  {
    name: 'fit',
    summary: 'the response model that logs support, with 95 % intervals',
    load: async () => (await import('./fit.ts')).definition,
  },
  {
    name: 'predict',
    summary: 'the response to expect of a set of gains, its band and its margins',
    load: async () => (await import('./predict.ts')).definition,
  },
  {
    name: 'checklist',
    summary: 'what is ticked before the next powered trial, with its own figures',
    load: async () => (await import('./checklist.ts')).definition,
  },
  {
    name: 'gains',
    summary: 'the same gains as another controller writes them',
    load: async () => (await import('./gains.ts')).definition,
  },
  {
    name: 'profiles',
    summary: 'the mechanisms that are known, and the starters',
    load: async () => (await import('./profiles.ts')).definition,
  },
  {
    name: 'new',
    summary: 'a profile of your own, copied from a starter or another',
    load: async () => (await import('./new.ts')).definition,
  },
];
