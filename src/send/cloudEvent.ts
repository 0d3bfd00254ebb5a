import { alertData } from '../alert/alertData.js';
import type { AlertData } from '../alert/alertData.js';
import { formatInstant } from '../clock/format.js';
import type { Message } from '../terms/message.js';

/** A CloudEvents 1.0 event, to be sent in structured mode (one JSON document). */
export interface CloudEvent {
  readonly specversion: '1.0';
  readonly id: string;
  readonly source: string;
  readonly type: string;
  /** RFC 3339, UTC: when the message was made, not when it was sent. */
  readonly time: string;
  readonly datacontenttype: 'application/json';
  readonly data: { readonly summary: string; readonly alerts: readonly AlertData[] };
}

/**
 * The event that carries a message. It depends on the message and the source alone, so that every
 * retry sends the same bytes and a receiver can drop what it has by (source, id).
 *
 * @param source the instance, a URI reference; the same for the whole life of a store.
 * @throws RangeError when the source is empty, which CloudEvents forbids.
 * Source: CloudEvents specification 1.0.2 (Cloud Native Computing Foundation, 2022), sections
 * "Required Attributes" and "JSON Event Format".
 */
export function cloudEvent(message: Message, source: string): CloudEvent {
  if (source === '') throw new RangeError('source: is empty; give the URI of the instance');
  return {
    specversion: '1.0',
    id: message.id,
    source,
    type: eventType(message.event),
    time: formatInstant(message.createdAtMs),
    datacontenttype: 'application/json',
    data: { summary: message.summary, alerts: message.alerts.map(alertData) },
  };
}

function eventType(event: Message['event']): string {
  return event === 'digest' ? 'tallyward.digest' : `tallyward.alert.${event}`;
}
