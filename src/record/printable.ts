/** Most characters of an untrusted text that are ever shown. */
const MOST_SHOWN = 200;

/**
 * Untrusted text made safe to print: control characters (escape sequences among them), line separators, direction marks,
 * characters that do not show and halves of pairs are shown as a middle dot, and long texts are cut.
 */
export function printable(text: string): string {
  const characters = [...text];
  const short = characters.length > MOST_SHOWN ? `${characters.slice(0, MOST_SHOWN).join('')}…` : text;
  return short.replace(/[\p{Cc}\p{Cf}\p{Cs}\u2028\u2029\u115f\u1160\u3164\uffa0]/gu, '·');
}
