/** A command line that cannot be taken apart. */
export class UnclosedQuote extends Error {
  readonly quote: string;

  constructor(quote: string) {
    super(`The command has an opening ${quote} without a closing one.`);
    this.quote = quote;
  }
}

/**
 * Takes a command line apart into words, without a shell: blanks part words, `'…'` keeps everything in it, `"…"` keeps
 * blanks. A backslash makes a blank, a quote or a backslash after it plain, and is itself plain before anything else,
 * so that `C:\rig\run.exe` stays what it is.
 *
 * @throws {UnclosedQuote}
 */
export function splitWords(line: string): readonly string[] {
  const words: string[] = [];
  let word: string | null = null;
  let quote: string | null = null;
  for (let at = 0; at < line.length; at += 1) {
    const here = line.charAt(at);
    const next = line.charAt(at + 1);
    if (here === '\\' && quote !== "'" && next !== '' && /[\s"'\\]/.test(next)) {
      word = (word ?? '') + next;
      at += 1;
    } else if (quote !== null) {
      if (here === quote) quote = null;
      else word = (word ?? '') + here;
    } else if (here === '"' || here === "'") {
      quote = here;
      word ??= '';
    } else if (/\s/.test(here)) {
      if (word !== null) words.push(word);
      word = null;
    } else {
      word = (word ?? '') + here;
    }
  }
  if (quote !== null) throw new UnclosedQuote(quote);
  if (word !== null) words.push(word);
  return words;
}
