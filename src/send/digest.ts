import { createHash } from 'node:crypto';

import { counted } from '../alert/words.js';
import type { Clock } from '../clock/clock.js';
import type { SenderConfig } from '../config/types.js';
import type { Store } from '../store/store.js';
import type { Alert } from '../terms/alert.js';
import type { Message } from '../terms/message.js';
import type { DigestEntry } from '../terms/round.js';

export interface DigestPorts {
  readonly store: Pick<Store, 'digestEntries' | 'closeDigest' | 'alerts'>;
  readonly senders: readonly SenderConfig[];
  readonly clock: Clock;
  /** Catching up after downtime has just ended: what was kept goes out at once. */
  readonly caughtUp: boolean;
}

const maxListed = 50;
/** Alerts are read in pieces of this size, so that memory stays bounded after a long downtime. */
const readAtOnce = 200;

/**
 * Puts the digests that are due into the outbox: `digestMs` after the first entry, or at once.
 * An entry that a round adds meanwhile waits for the next digest.
 *
 * @returns real time at which the next digest is due; null when no entry waits.
 * @throws StoreError when the store refuses.
 */
export async function closeDigests(ports: DigestPorts): Promise<number | null> {
  const { store, senders, clock, caughtUp } = ports;
  let nextMs: number | null = null;
  for (const sender of senders) {
    const entries = [...(await store.digestEntries(sender.name))].sort(byTime);
    const first = entries[0];
    if (first === undefined) continue;
    const dueMs = first.createdAtMs + sender.digestMs;
    const nowMs = clock.nowMs();
    if (caughtUp || dueMs <= nowMs) {
      const message = await digestMessage(sender, { entries, first, nowMs, store });
      await store.closeDigest(message, entries.length);
    } else {
      nextMs = nextMs === null ? dueMs : Math.min(nextMs, dueMs);
    }
  }
  return nextMs;
}

function byTime(a: DigestEntry, b: DigestEntry): number {
  if (a.createdAtMs !== b.createdAtMs) return a.createdAtMs - b.createdAtMs;
  return compare(a.alertId, b.alertId) || compare(a.event, b.event);
}

async function digestMessage(
  sender: SenderConfig,
  what: {
    readonly entries: readonly DigestEntry[];
    readonly first: DigestEntry;
    readonly nowMs: number;
    readonly store: DigestPorts['store'];
  },
): Promise<Message> {
  const { first, entries } = what;
  const { listed, total, raised, open } = await gather(entries, what.store);
  const head = `while Tallyward was away: ${counted(raised, 'shift')}, ` + `${open} still open`;
  const more = total > listed.length ? [`and ${total - listed.length} more`] : [];
  return {
    id: digestId(sender.name, first),
    sender: sender.name,
    event: 'digest',
    createdAtMs: what.nowMs,
    summary: [head, ...listed.map(({ sentence }) => sentence), ...more].join('\n'),
    alerts: listed,
  };
}

/** The same digest gets the same id however often its making was begun. */
function digestId(sender: string, first: DigestEntry): string {
  const text = JSON.stringify([sender, first.alertId, first.event, first.createdAtMs]);
  return `digest-${createHash('sha256').update(text).digest('hex').slice(0, 32)}`;
}

/** Reads the alerts of the entries: the first 50 in order of raising, and how many there are. */
async function gather(
  entries: readonly DigestEntry[],
  store: DigestPorts['store'],
): Promise<{
  readonly listed: readonly Alert[];
  readonly total: number;
  readonly raised: number;
  readonly open: number;
}> {
  const raisedIds = new Set(
    entries.filter(({ event }) => event === 'raised').map(({ alertId }) => alertId),
  );
  const ids = [...new Set(entries.map(({ alertId }) => alertId))].sort(compare);
  let listed: readonly Alert[] = [];
  let total = 0;
  let open = 0;
  for (let start = 0; start < ids.length; start += readAtOnce) {
    const alerts = await store.alerts({ ids: ids.slice(start, start + readAtOnce) });
    total += alerts.length;
    open += alerts.filter((alert) => raisedIds.has(alert.id) && isInAlarm(alert)).length;
    listed = [...listed, ...alerts].sort(byRaising).slice(0, maxListed);
  }
  return { listed, total, raised: raisedIds.size, open };
}

function isInAlarm(alert: Alert): boolean {
  return alert.state === 'unacknowledged' || alert.state === 'acknowledged';
}

function byRaising(a: Alert, b: Alert): number {
  return a.raisedAtMs - b.raisedAtMs || compare(a.id, b.id);
}

/** Order of code units, which is the code points' for the plain ids compared here. */
function compare(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
