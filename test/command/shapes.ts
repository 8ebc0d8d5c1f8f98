import { z } from 'zod';

// The JSON results of contracts, section 5, as strict shapes: a field more or less fails.

const figure = z.number().nullable();
const triple = z.tuple([z.number(), z.number(), z.number()]);
const spread = z.tuple([figure, figure, figure]);
const gains = z.strictObject({
  kp: z.number(),
  ki: z.number(),
  kd: z.number(),
  zone: z.number().nullable(),
  hold: z.number(),
  pace: z.number(),
});
const figuresOf = <T extends z.ZodType>(shape: T) =>
  z.strictObject({
    riseTime: shape,
    overshoot: shape,
    settlingTime: shape,
    restingError: shape,
    swingRatio: shape,
    swingPeriod: shape,
    saturated: shape,
    chatter: shape,
  });
const figures = figuresOf(figure);
const model = z.strictObject({
  topSpeed: triple,
  lag: triple,
  drag: triple,
  breakaway: triple,
  hold: triple,
  delay: triple,
});
const margins = z.strictObject({ gain: figure, phase: figure, delay: figure, maxSensitivity: figure });
const verdict = z.enum([
  'settled',
  'slow',
  'stuck-short',
  'overshoots',
  'swings',
  'steady-swing',
  'growing-swing',
  'hunting',
  'wound-up',
  'chatters',
  'saturated',
  'late',
  'reversed',
  'deaf',
  'frozen',
  'jumps',
  'wrong-scale',
  'hit-a-stop',
  'sagging',
  'uneven-ticks',
  'one-sided',
  'loose',
  'out-of-band',
  'out-of-reach',
]);

export const tuneResult = z.strictObject({
  format: z.literal('holdfast/tune-result@1'),
  profile: z.string(),
  met: z.boolean(),
  stopped: z.string(),
  gains,
  trials: z.array(
    z.strictObject({
      trial: z.number().int().positive(),
      stage: z.enum(['ready', 'proportional', 'integral', 'derivative', 'proof']),
      gains,
      move: z.strictObject({ from: z.number(), to: z.number() }),
      outputCap: z.number().positive().max(1),
      log: z.string().startsWith('trials/').endsWith('.csv').nullable(),
      figures,
      verdict: z.array(verdict),
      why: z.string().min(1),
      inBand: z.boolean().nullable(),
    }),
  ),
  model: model.nullable(),
  margins: margins.nullable(),
});

const column = z.strictObject({ header: z.string(), unit: z.string().nullable(), scale: z.number() });

export const readResult = z.strictObject({
  format: z.literal('holdfast/read-result@1'),
  file: z.string(),
  rows: z.number().int(),
  duration: z.number(),
  period: z.number(),
  columns: z.strictObject({ time: column, setpoint: column, measured: column, output: column.nullable() }),
  moves: z.array(
    z.strictObject({
      start: z.number(),
      end: z.number(),
      from: z.number(),
      to: z.number(),
      figures,
      verdict: z.array(z.strictObject({ is: verdict, because: z.string().min(1) })),
    }),
  ),
  repairs: z.array(z.string()),
  warnings: z.array(z.string()),
});

export const fitResult = z.strictObject({
  format: z.literal('holdfast/fit-result@1'),
  logs: z.array(z.string()),
  quantity: z.enum(['position', 'speed']),
  unit: z.string().nullable(),
  model,
  fit: z.number().nullable(),
  rowShift: z.number().int(),
  unlearnt: z.array(z.string()),
  usable: z.boolean(),
  warnings: z.array(z.string()),
});

export const predictResult = z.strictObject({
  format: z.literal('holdfast/predict-result@1'),
  gains,
  figures: figuresOf(spread),
  margins,
  time: z.array(z.number()),
  band: z.strictObject({ low: z.array(z.number()), middle: z.array(z.number()), high: z.array(z.number()) }),
});

export const checklistResult = z.strictObject({
  format: z.literal('holdfast/checklist@1'),
  profile: z.string(),
  figures: z.strictObject({
    travelForward: figure,
    travelBack: figure,
    topSpeed: figure,
    energy: figure,
    coast: figure,
    drop: z.strictObject({ height: z.number(), energy: z.number(), time: z.number() }).nullable(),
  }),
  items: z.array(z.strictObject({ id: z.string(), text: z.string(), hazard: z.string().nullable() })).min(9),
  abort: z.array(z.string()).min(1),
  cautions: z.array(z.string()).min(1),
});

export const errorResult = z.strictObject({
  format: z.literal('holdfast/error@1'),
  exit: z.number().int().min(1).max(5),
  what: z.string().min(1),
  where: z.strictObject({
    file: z.string().nullable(),
    line: z.number().int().nullable(),
    field: z.string().nullable(),
  }),
  remedy: z.string().min(1),
});
