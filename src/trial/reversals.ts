/**
 * Reversals of an output larger than `least`, a second: how often it turns and comes back by more than that.
 *
 * @param least output unit
 */
export function reversalsOf(output: Float64Array, time: Float64Array, least: number, rows = output.length): number {
  const span = (time[rows - 1] ?? 0) - (time[0] ?? 0);
  return span > 0 ? turnsOf(output, least, rows) / span : 0;
}

function turnsOf(output: Float64Array, least: number, rows: number): number {
  let turns = 0;
  let direction = 0;
  let extreme = output[0] ?? 0;
  for (let row = 1; row < rows; row++) {
    const value = output[row] ?? 0;
    const onward = direction >= 0 ? value >= extreme : value <= extreme;
    if (direction !== 0 && onward) extreme = value;
    else if (Math.abs(value - extreme) > least) {
      if (direction !== 0) turns++;
      direction = Math.sign(value - extreme);
      extreme = value;
    }
  }
  return turns;
}
