import { placeName } from '../alert/sentence.js';
import { counted } from '../alert/words.js';
import { formatInstant } from '../clock/format.js';
import type { Verdict } from '../terms/verdict.js';

/** One verdict as one line for a person. */
export function verdictLine(verdict: Verdict): string {
  const { startMs, endMs } = verdict.window;
  const span = `${formatInstant(startMs)} to ${formatInstant(endMs)}`;
  const place = placeName(verdict.mix, verdict.strand);
  const events = counted(verdict.events, 'event');
  return `${span}  ${verdict.verdict}  ${place}  ${events}: ${verdict.reason}`;
}
