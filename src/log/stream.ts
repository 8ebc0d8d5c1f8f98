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

/** Rows between looks at whether a move has ended. */
const LOOK_EVERY = 512;

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
  await eachRow(source.pieces, shape.layout, source.name, (cells, line) => {
    const wanted = cells[setpointAt] ?? '';
    const changed = wanted !== standing;
    standing = wanted;
    // A new setpoint after a long stand closes the move before it; the rows before are complete then.
    if ((changed && held >= LOOK_EVERY) || held >= MOST_HELD) {
      flush();
      held = 0;
    }
    held = changed ? 0 : held + 1;
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
