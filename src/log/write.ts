import type { Samples } from '../record/samples.ts';

/**
 * A log as text: canonical header, one row a sample, RFC 4180 line ends, numbers in the shortest form that reads back to the
 * same double.
 */
export function writeLog(samples: Samples): string {
  const { time, setpoint, measured, output, supply, current, enabled, parts } = samples;
  const columns: (readonly [name: string, values: Float64Array])[] = [
    ['time', time],
    ['setpoint', setpoint],
    ['measured', measured],
  ];
  if (output) columns.push(['output', output]);
  if (supply) columns.push(['supply', supply]);
  if (current) columns.push(['current', current]);
  if (enabled) columns.push(['enabled', enabled]);
  if (parts) columns.push(['p_part', parts.p], ['i_part', parts.i], ['d_part', parts.d]);
  const lines = [columns.map(([name]) => name).join(',')];
  for (let row = 0; row < time.length; row++) {
    lines.push(columns.map(([, values]) => text(values[row] ?? 0)).join(','));
  }
  return `${lines.join('\r\n')}\r\n`;
}

/** JavaScript prints the shortest digits that read back to the same double; only the sign of zero needs help. */
function text(value: number): string {
  return Object.is(value, -0) ? '-0' : String(value);
}
