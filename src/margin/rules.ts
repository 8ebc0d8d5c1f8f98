/** A PID setting as the rules publish it: gain and times; null = the term is not used. */
export interface RuleSetting {
  readonly gain: number;
  /** s. */
  readonly integralTime: number | null;
  /** s. */
  readonly derivativeTime: number | null;
}

/** First order with dead time: K·e^(−Ls)/(Ts+1). */
export interface LagProcess {
  readonly gain: number;
  readonly lag: number;
  readonly deadTime: number;
}

/** Integrating with dead time: K·e^(−Ls)/s. */
export interface IntegratingProcess {
  readonly gain: number;
  readonly deadTime: number;
}

export type Terms = 'P' | 'PI' | 'PID';

/** A standard-form setting as parallel gains per second. */
export function parallelOf({ gain, integralTime, derivativeTime }: RuleSetting): {
  readonly kp: number;
  readonly ki: number;
  readonly kd: number;
} {
  return { kp: gain, ki: integralTime === null ? 0 : gain / integralTime, kd: gain * (derivativeTime ?? 0) };
}

const setting = (
  gain: number,
  integralTime: number | null = null,
  derivativeTime: number | null = null,
): RuleSetting => ({ gain, integralTime, derivativeTime });

/** Ziegler–Nichols from a step response. Source: Ziegler & Nichols, Trans. ASME 64 (1942) 759. */
export function zieglerNicholsStep({ gain, lag, deadTime }: LagProcess, terms: Terms): RuleSetting {
  const a = (gain * deadTime) / lag;
  if (terms === 'P') return setting(1 / a);
  return terms === 'PI' ? setting(0.9 / a, deadTime / 0.3) : setting(1.2 / a, 2 * deadTime, deadTime / 2);
}

/** Ziegler–Nichols from the ultimate gain and period. Source: as above. */
export function zieglerNicholsUltimate(ultimateGain: number, ultimatePeriod: number, terms: Terms): RuleSetting {
  if (terms === 'P') return setting(0.5 * ultimateGain);
  return terms === 'PI'
    ? setting(0.45 * ultimateGain, ultimatePeriod / 1.2)
    : setting(0.6 * ultimateGain, ultimatePeriod / 2, ultimatePeriod / 8);
}

/** Tyreus–Luyben, gentler than Ziegler–Nichols. Source: Tyreus & Luyben, Ind. Eng. Chem. Res. 31 (1992) 2625. */
export function tyreusLuyben(ultimateGain: number, ultimatePeriod: number, terms: 'PI' | 'PID'): RuleSetting {
  return terms === 'PI'
    ? setting(ultimateGain / 3.2, 2.2 * ultimatePeriod)
    : setting(ultimateGain / 2.2, 2.2 * ultimatePeriod, ultimatePeriod / 6.3);
}

/** Chien–Hrones–Reswick for the setpoint, with no overshoot or 20 %. Source: Trans. ASME 74 (1952) 175 (mem). */
export function chienHronesReswick(
  { gain, lag, deadTime }: LagProcess,
  overshoot: 0 | 20,
  terms: 'PI' | 'PID',
): RuleSetting {
  const a = (gain * deadTime) / lag;
  if (overshoot === 0) return terms === 'PI' ? setting(0.35 / a, 1.2 * lag) : setting(0.6 / a, lag, 0.5 * deadTime);
  return terms === 'PI' ? setting(0.6 / a, lag) : setting(0.95 / a, 1.35 * lag, 0.47 * deadTime);
}

/** Cohen–Coon, PID. Source: Cohen & Coon, Trans. ASME 75 (1953) 827 (mem). */
export function cohenCoon({ gain, lag, deadTime }: LagProcess): RuleSetting {
  const share = deadTime / lag;
  return setting(
    (1 / gain) * (lag / deadTime) * (4 / 3 + share / 4),
    (deadTime * (32 + 6 * share)) / (13 + 8 * share),
    (deadTime * 4) / (11 + 2 * share),
  );
}

/**
 * SIMC for a first-order process; `closedLoopLag` τc = the dead time is the tight setting.
 * Source: Skogestad, J. Process Control 13 (2003) 291.
 */
export function simc({ gain, lag, deadTime }: LagProcess, closedLoopLag: number = deadTime): RuleSetting {
  return setting(lag / (gain * (closedLoopLag + deadTime)), Math.min(lag, 4 * (closedLoopLag + deadTime)));
}

/** SIMC for an integrating process; `secondLag` > 0 adds the derivative of the series form that cancels it. Source: as above. */
export function simcIntegrating(
  { gain, deadTime }: IntegratingProcess,
  closedLoopLag: number = deadTime,
  secondLag = 0,
): RuleSetting {
  return setting(
    1 / (gain * (closedLoopLag + deadTime)),
    4 * (closedLoopLag + deadTime),
    secondLag > 0 ? secondLag : null,
  );
}

/** AMIGO. Source: Åström & Hägglund, J. Process Control 14 (2004) 635. */
export function amigo({ gain, lag, deadTime }: LagProcess, terms: 'PI' | 'PID'): RuleSetting {
  if (terms === 'PID') {
    return setting(
      (0.2 + (0.45 * lag) / deadTime) / gain,
      (deadTime * (0.4 * deadTime + 0.8 * lag)) / (deadTime + 0.1 * lag),
      (0.5 * deadTime * lag) / (0.3 * deadTime + lag),
    );
  }
  const shape = 0.35 - (deadTime * lag) / (deadTime + lag) ** 2;
  return setting(
    0.15 / gain + (shape * lag) / (gain * deadTime),
    0.35 * deadTime + (13 * deadTime * lag ** 2) / (lag ** 2 + 12 * lag * deadTime + 7 * deadTime ** 2),
  );
}

/** AMIGO for an integrating process. Source: as above (mem). */
export function amigoIntegrating({ gain, deadTime }: IntegratingProcess, terms: 'PI' | 'PID'): RuleSetting {
  return terms === 'PI'
    ? setting(0.35 / (gain * deadTime), 13.4 * deadTime)
    : setting(0.45 / (gain * deadTime), 8 * deadTime, 0.5 * deadTime);
}

/** Dahlin's λ-tuning, PI. Source: Dahlin, Instruments and Control Systems 41 (1968) (mem). */
export function lambdaTuning({ gain, lag, deadTime }: LagProcess, closedLoopLag: number): RuleSetting {
  return setting(lag / (gain * (closedLoopLag + deadTime)), lag);
}

/** Internal-model PID. Source: Rivera, Morari & Skogestad, Ind. Eng. Chem. Process Des. Dev. 25 (1986) 252 (mem). */
export function internalModel({ gain, lag, deadTime }: LagProcess, closedLoopLag: number): RuleSetting {
  return setting(
    (lag + deadTime / 2) / (gain * (closedLoopLag + deadTime / 2)),
    lag + deadTime / 2,
    (lag * deadTime) / (2 * lag + deadTime),
  );
}

/**
 * Ultimate gain from a relay experiment: relay height d, amplitude a, hysteresis ε. Reads the true one low by 3 to 19 %.
 * Source: Åström & Hägglund, Automatica 20 (1984) 645.
 */
export function relayUltimateGain(relay: number, amplitude: number, hysteresis = 0): number {
  return (4 * relay) / (Math.PI * Math.sqrt(amplitude ** 2 - hysteresis ** 2));
}

/** Ultimate gain and period of K·e^(−Ls)/s: π/(2KL) and 4L (closed form). */
export function ultimateOfIntegrating({ gain, deadTime }: IntegratingProcess): {
  readonly gain: number;
  readonly period: number;
} {
  return { gain: Math.PI / (2 * gain * deadTime), period: 4 * deadTime };
}

/** Ultimate gain and period of K·e^(−Ls)/(Ts+1): ωL + atan ωT = π, solved by bisection. */
export function ultimateOfLag({ gain, lag, deadTime }: LagProcess): { readonly gain: number; readonly period: number } {
  let low = Math.PI / (2 * deadTime);
  let high = Math.PI / deadTime;
  for (let round = 0; round < 80; round++) {
    const middle = 0.5 * (low + high);
    if (middle * deadTime + Math.atan(middle * lag) < Math.PI) low = middle;
    else high = middle;
  }
  return { gain: Math.hypot(1, low * lag) / gain, period: (2 * Math.PI) / low };
}

/** PD by pole placement on K/(s(τs+1)): natural frequency and damping ratio of the closed loop (closed form). */
export function placePd(
  topSpeed: number,
  lag: number,
  frequency: number,
  damping: number,
): { readonly kp: number; readonly kd: number } {
  return { kp: (frequency ** 2 * lag) / topSpeed, kd: (2 * damping * frequency * lag - 1) / topSpeed };
}

/** PI by pole placement on K/(τs+1) (closed form). */
export function placePi(
  gain: number,
  lag: number,
  frequency: number,
  damping: number,
): { readonly kp: number; readonly ki: number } {
  return { kp: (2 * damping * frequency * lag - 1) / gain, ki: (frequency ** 2 * lag) / gain };
}

/** PID by pole placement on K/(s(τs+1)): (s + αω)(s² + 2ζωs + ω²) (closed form). */
export function placePid(
  topSpeed: number,
  lag: number,
  frequency: number,
  damping: number,
  third: number,
): { readonly kp: number; readonly ki: number; readonly kd: number } {
  return {
    kp: (lag * frequency ** 2 * (1 + 2 * third * damping)) / topSpeed,
    ki: (lag * third * frequency ** 3) / topSpeed,
    kd: (lag * frequency * (third + 2 * damping) - 1) / topSpeed,
  };
}

/**
 * The first Ki: a resting error that should build an output in so many seconds. Common practice, no source.
 *
 * @param output  what the integral should add, output unit
 * @param error  resting error, measured unit
 */
export function firstIntegralGain(output: number, error: number, seconds: number): number {
  return output / (error * seconds);
}
