import type { ResponseModel } from '../plant/response-model.ts';

export interface Coast {
  /** s. */
  readonly time: number;
  /** Profile unit (for a speed loop: unit·s). */
  readonly distance: number;
}

/** Drag of the easier direction: nobody knows which way it will be going. */
const leastDrag = ({ drag, dragBack }: ResponseModel) => Math.min(drag, dragBack);

/**
 * Coasting with the motor shorted: its own back-EMF and drag stop it. Weight is left out: what falls has a drop.
 *
 * Source: closed form of τ·v′ = −v − K·c from v₀ to rest.
 */
export function coastShorted(response: ResponseModel, speed: number): Coast {
  const braking = response.topSpeed * leastDrag(response);
  if (speed <= 0) return { time: 0, distance: 0 };
  if (braking <= 0) return { time: Number.POSITIVE_INFINITY, distance: response.lag * speed };
  const time = response.lag * Math.log1p(speed / braking);
  return { time, distance: response.lag * speed - braking * time };
}

/** Coasting with the motor open: drag alone stops it, at the constant rate K·c/τ (closed form); never where there is none. */
export function coastOpen(response: ResponseModel, speed: number): Coast {
  const rate = (response.topSpeed * leastDrag(response)) / response.lag;
  if (speed <= 0) return { time: 0, distance: 0 };
  if (rate <= 0) return { time: Number.POSITIVE_INFINITY, distance: Number.POSITIVE_INFINITY };
  return { time: speed / rate, distance: speed ** 2 / (2 * rate) };
}
