/** Most characters of an untrusted text that are ever shown. */
const MOST_SHOWN = 200;

/**
 * Untrusted text made safe to print: control characters (escape sequences among them), line separators and direction marks
 * are shown as a middle dot, and long texts are cut.
 */
export function printable(text: string): string {
  const short = text.length > MOST_SHOWN ? `${text.slice(0, MOST_SHOWN)}…` : text;
  return short.replace(/[\u0000-\u001f\u007f-\u009f\u2028-\u202e\u2066-\u2069\ufeff]/g, '·');
}
