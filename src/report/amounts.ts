import type { Move, Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';

/** An amount of the measured quantity, to the digits that the profile's sensor can tell. */
export function amount(value: number, profile: Profile): string {
  return formatQuantity(value, profile.unit, profile.sensor?.resolution ?? 0);
}

export function seconds(value: number): string {
  return `${formatNumber(value, 2)} s`;
}

export function percent(value: number): string {
  return `${formatNumber(value, 2)} %`;
}

export function milliseconds(value: number): string {
  return `${formatNumber(1000 * value, 3)} ms`;
}

export function moveText({ from, to }: Move, profile: Profile): string {
  return `${amount(from, profile)} → ${amount(to, profile)}`;
}

/** A speed: the quantity itself for a speed loop. */
export function speedText(value: number, profile: Profile): string {
  return `${formatQuantity(value, profile.unit)}${profile.quantity === 'speed' ? '' : '/s'}`;
}
