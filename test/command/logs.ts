import { writeFileSync } from 'node:fs';
import { join } from 'node:path';

/** Rows of a canonical log of the unit step of ωn²/(s² + 2ζωn s + ωn²), in closed form, 100 rows a second. */
export function secondOrderRows(
  dampingRatio: number,
  frequency: number,
  seconds: number,
): readonly (readonly number[])[] {
  const damped = frequency * Math.sqrt(1 - dampingRatio ** 2);
  const decay = dampingRatio * frequency;
  return Array.from({ length: Math.round(seconds * 100) + 1 }, (_, k) => {
    const t = k / 100;
    const y = 1 - Math.exp(-decay * t) * (Math.cos(damped * t) + (decay / damped) * Math.sin(damped * t));
    return [t, 1, y, 0.8 * (1 - y)];
  });
}

export function csv(header: string, rows: readonly (readonly (number | string)[])[]): string {
  return [header, ...rows.map((row) => row.join(','))].join('\n');
}

export const CANONICAL = 'time,setpoint,measured,output';

/** Writes a file into a folder and hands its name back. */
export function put(folder: string, name: string, content: string | Uint8Array): string {
  writeFileSync(join(folder, name), content);
  return name;
}
