import type { Unit } from './profile.ts';

/**
 * A number to so many significant digits, without trailing zeros: 0.031, 12, 1450.
 */
export function formatNumber(value: number, digits: number): string {
  if (!Number.isFinite(value)) return 'not known';
  if (value === 0) return '0';
  const magnitude = Math.floor(Math.log10(Math.abs(value)));
  const decimals = Math.max(0, Math.min(12, digits - 1 - magnitude));
  const text = value.toFixed(decimals);
  const trimmed = decimals > 0 ? text.replace(/\.?0+$/, '') : text;
  return trimmed === '-0' ? '0' : trimmed;
}

const SMALLER: Partial<Record<Unit, readonly [unit: string, factor: number]>> = {
  m: ['mm', 1000],
  'm/s': ['mm/s', 1000],
};

/**
 * A measured amount with its unit, to the digits that the sensor can tell: small lengths in mm, so that "4 mm" is read
 * and not "0.004 m".
 *
 * @param resolution one step of the sensor, same unit; 0 = not known
 */
export function formatQuantity(value: number, unit: Unit, resolution = 0): string {
  if (!Number.isFinite(value)) return 'not known';
  const smaller = SMALLER[unit];
  if (smaller && Math.abs(value) < 0.1 && value !== 0) {
    return `${rounded(value * smaller[1], resolution * smaller[1])} ${smaller[0]}`;
  }
  return `${rounded(value, resolution)} ${unit}`;
}

function rounded(value: number, resolution: number): string {
  const magnitude = value === 0 ? 0 : Math.floor(Math.log10(Math.abs(value)));
  const digits = Math.max(2, Math.min(4, magnitude + 2));
  if (resolution <= 0) return formatNumber(value, Math.max(3, digits));
  const finest = Math.floor(Math.log10(resolution));
  return formatNumber(value, Math.max(1, Math.min(4, magnitude - finest + 1)));
}
