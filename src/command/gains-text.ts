import type { Gains } from '../controller/settings.ts';
import type { Profile } from '../mechanism/profile.ts';
import { formatNumber, formatQuantity } from '../mechanism/quantity.ts';

/** Gains on one line, those that are off left out: `Kp 23.3 · hold 0.0364`. */
export function gainsLine(gains: Gains, profile: Profile): string {
  const number = (value: number) => formatNumber(value, 4);
  const parts = [`Kp ${number(gains.kp)}`];
  if (gains.ki !== 0) parts.push(`Ki ${number(gains.ki)}`);
  if (gains.ki !== 0 && gains.zone !== null) {
    parts.push(`zone ${formatQuantity(gains.zone, profile.unit, profile.sensor?.resolution ?? 0)}`);
  }
  if (gains.kd !== 0) parts.push(`Kd ${number(gains.kd)}`);
  if (gains.hold !== 0) parts.push(`hold ${number(gains.hold)}`);
  if (gains.pace !== 0) parts.push(`pace ${number(gains.pace)}`);
  return parts.join(' · ');
}
