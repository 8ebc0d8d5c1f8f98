import { POSITION_UNITS, SPEED_UNITS, type Unit } from '../mechanism/profile.ts';

export const ROLES = ['time', 'setpoint', 'measured', 'output', 'supply', 'current', 'enabled', 'p', 'i', 'd'] as const;
export type Role = (typeof ROLES)[number];

/** Names that loggers give, in lower case without units; the first of a list is the surest. */
export const NAMES: Readonly<Record<Role, readonly string[]>> = {
  time: [
    'time',
    't',
    'timestamp',
    'elapsed',
    'elapsed time',
    'zeit',
    'temps',
    'tiempo',
    'seconds',
    'clock',
    'millis',
    'micros',
  ],
  setpoint: [
    'setpoint',
    'sp',
    'target',
    'reference',
    'ref',
    'desired',
    'goal',
    'wanted',
    'demand',
    'r',
    'soll',
    'sollwert',
    'consigne',
    'consigna',
    'set',
  ],
  measured: [
    'measured',
    'position',
    'pos',
    'actual',
    'angle',
    'speed',
    'velocity',
    'vel',
    'height',
    'heading',
    'pv',
    'feedback',
    'meas',
    'y',
    'reading',
    'distance',
    'rpm',
    'ist',
    'istwert',
    'mesure',
    'medida',
    'encoder',
    'extension',
  ],
  output: [
    'output',
    'out',
    'u',
    'duty',
    'effort',
    'command',
    'cmd',
    'control',
    'applied',
    'voltage',
    'motor',
    'power',
    'pwm',
    'drive',
    'stellgrosse',
    'stellgröße',
    'commande',
    'salida',
  ],
  supply: ['supply', 'battery', 'vbat', 'bus', 'bus voltage', 'battery voltage', 'batterie', 'supply voltage', 'vbus'],
  current: ['current', 'amps', 'motor current', 'strom', 'courant', 'corriente', 'i motor'],
  enabled: ['enabled', 'enable', 'active', 'on'],
  p: ['p_part', 'p part', 'p term', 'p'],
  i: ['i_part', 'i part', 'i term', 'i'],
  d: ['d_part', 'd part', 'd term', 'd'],
};

const UNIT_WORDS: Readonly<Record<string, Unit>> = {
  ...Object.fromEntries([...POSITION_UNITS, ...SPEED_UNITS].map((unit) => [unit, unit])),
  '°': 'deg',
  degrees: 'deg',
  degree: 'deg',
  radians: 'rad',
  turns: 'rev',
  turn: 'rev',
  revs: 'rev',
  meters: 'm',
  metres: 'm',
  inch: 'in',
  inches: 'in',
  feet: 'ft',
  '°/s': 'deg/s',
  rps: 'rev/s',
  deg_s: 'deg/s',
  rad_s: 'rad/s',
  m_s: 'm/s',
  mm_s: 'mm/s',
  dps: 'deg/s',
  'm/sec': 'm/s',
  'deg/sec': 'deg/s',
};

/** A header taken apart: the name in plain lower case, and the unit if it names one. */
export function partsOf(header: string): { readonly name: string; readonly unit: string | null } {
  const text = header.trim();
  const bracketed = /^(.*?)\s*[[({]\s*([^\])}]*)\s*[\])}]\s*$/.exec(text);
  if (bracketed) return { name: plain(bracketed[1] ?? ''), unit: (bracketed[2] ?? '').trim() || null };
  const spoken = /^(.*?)\s+(%|v|volts?|ms|s|us|µs|deg|rad|rpm|mm|cm|m|in|ft)$/i.exec(text);
  if (spoken) return { name: plain(spoken[1] ?? ''), unit: spoken[2] ?? null };
  const tailed =
    /^(.*?)_(s|ms|us|ns|deg_s|rad_s|mm_s|m_s|deg|rad|rev|rpm|mm|cm|m|in|ft|v|volts|a|pct|percent|ticks|counts)(_[a-z]+)?$/i.exec(
      text,
    );
  if (tailed) return { name: plain(`${tailed[1] ?? ''}${tailed[3] ?? ''}`), unit: tailed[2] ?? null };
  return { name: plain(text), unit: null };
}

export const plain = (text: string) =>
  text
    .trim()
    .toLowerCase()
    .replace(/[_\-.]+/g, ' ')
    .replace(/\s+/g, ' ')
    .trim();

/** The unit that a header means by a word: `deg`, `°/s`, `rad_s`; null when it is none that is known. */
export function knownUnit(text: string): Unit | null {
  return UNIT_WORDS[text] ?? UNIT_WORDS[text.toLowerCase()] ?? null;
}
