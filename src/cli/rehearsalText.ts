import { counted, grouped } from '../alert/words.js';
import type { Rehearsal } from './rehearsal.js';

/** A rehearsal in words. */
export function rehearsalText(result: Rehearsal): string {
  const rejected = Object.entries(result.rejected).map(([why, n]) => `${grouped(n)} ${why}`);
  const verdicts = Object.entries(result.verdicts).map(([name, n]) => `${grouped(n)} ${name}`);
  return [
    `${counted(result.events, 'event')} read, ${grouped(result.late)} of them late; rejected: ` +
      (rejected.join(', ') || 'none'),
    `${counted(result.windows, 'window')} of ${counted(result.strands, 'strand')} judged in ` +
      `${counted(result.rounds, 'round')}: ${verdicts.join(', ') || 'none'}`,
    `level of a round ${String(Number(result.level.toPrecision(3)))}; false alarms expected in a ` +
      `week: ${String(Number(result.expectedFalseAlarms.toPrecision(2)))}`,
    result.alerts.length === 0 ? 'no alerts' : `${counted(result.alerts.length, 'alert')}:`,
    ...result.alerts.map(alertLine),
  ].join('\n');
}

function alertLine(alert: Rehearsal['alerts'][number]): string {
  const end = alert.ended === null ? 'still open' : `${alert.ended.how} ${alert.ended.at}`;
  return `  ${alert.raisedAt}  ${alert.sentence} (${end})`;
}
