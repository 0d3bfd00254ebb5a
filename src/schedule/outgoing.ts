import type { SenderConfig } from '../config/types.js';
import type { Alert, AlertEvent } from '../terms/alert.js';
import type { Message } from '../terms/message.js';
import type { DigestEntry } from '../terms/round.js';

/** Something to tell about an alert. */
export interface News {
  readonly alert: Alert;
  readonly event: AlertEvent;
}

/**
 * What each sender is asked to deliver. News of a window judged much later than it could have been
 * (after downtime, say) is no longer fresh: it waits for one digest instead of paging anybody, and
 * so does what is provisional.
 */
export function outgoing(
  news: readonly News[],
  senders: readonly SenderConfig[],
  times: { readonly nowMs: number; readonly judgeableMs: ReadonlyMap<string, number> },
): { messages: Message[]; digestEntries: DigestEntry[] } {
  const messages: Message[] = [];
  const digestEntries: DigestEntry[] = [];
  for (const { alert, event } of news) {
    const age = times.nowMs - (times.judgeableMs.get(alert.mix) ?? times.nowMs);
    for (const sender of senders) {
      const entry = { sender: sender.name, event, createdAtMs: times.nowMs };
      if (age > sender.freshMs || alert.provisional) {
        digestEntries.push({ ...entry, alertId: alert.id });
      } else {
        const id = messageId(sender, alert, event);
        messages.push({ ...entry, id, ...content(alert, event) });
      }
    }
  }
  return { messages, digestEntries };
}

function messageId(sender: SenderConfig, alert: Alert, event: AlertEvent): string {
  return `${alert.id}-${event}-${sender.name}`;
}

function content(alert: Alert, event: AlertEvent): { summary: string; alerts: Alert[] } {
  const note = alert.history.at(-1)?.note ?? '';
  const summary =
    event === 'raised' || event === 'moved'
      ? alert.sentence
      : `${event}${note === '' ? '' : ` (${note})`}: ${alert.sentence}`;
  return { summary, alerts: [alert] };
}
