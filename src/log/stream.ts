import { gatherer } from './gather.ts';
import { PLAIN_READ, type ReadOptions, scaled, shapeOf } from './read.ts';
import { eachRow } from './rows.ts';
import { fileText } from './source.ts';
import { type LoggedMove, splitMoves } from './split.ts';

/** What a streamed log came to. */
export interface StreamSummary {
  readonly rows: number;
  readonly moves: number;
  readonly warnings: readonly string[];
}

/** Rows held at most before what is there is handed on, however long the move. */
const MOST_HELD = 200_000;

/** Rows gathered before a new setpoint is taken for the end of a move, and rows that it must have stood still before. */
const LOOK_EVERY = 512;
const STANDING = 40;

/**
 * Hands over a log move by move while it is read: memory is bounded by the longest move, not by the file.
 *
 * @throws {LogError} as `readLog`
 */
export async function streamMoves(
  path: string,
  onMove: (move: LoggedMove) => void,
  options: ReadOptions = PLAIN_READ,
): Promise<StreamSummary> {
  const shape = await shapeOf(fileText(path), options);
  const source = fileText(path);
  const rows = gatherer(shape.layout, shape.columns, source.name, options.rows === 'repaired');
  const warnings = [...shape.warnings];
  let moves = 0;
  const hand = (move: LoggedMove): void => {
    moves++;
    onMove(move);
  };
  const setpointAt = shape.columns.setpoint?.index ?? -1;
  let standing = '';
  let held = 0;
  let stood = 0;
  await eachRow(source.pieces, shape.layout, source.name, (cells, line) => {
    const wanted = cells[setpointAt] ?? '';
    const changed = wanted !== standing;
    standing = wanted;
    // A new setpoint after it has stood a while closes the move before it; the rows before are complete then.
    if ((changed && stood >= STANDING && held >= LOOK_EVERY) || held >= MOST_HELD) {
      rows.complete();
      flush();
      held = 0;
    }
    held++;
    stood = changed ? 0 : stood + 1;
    rows.take(cells, line);
  });
  const gathered = rows.end();
  flush();
  return { rows: gathered.rows, moves, warnings };

  function flush(): void {
    if (rows.rows() > 1) for (const move of splitMoves(scaled(rows.samples(), shape.columns, warnings))) hand(move);
    rows.clear();
  }
}
