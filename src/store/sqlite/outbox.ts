import type { Delivery, Message } from '../../terms/message.js';
import type { DigestEntry } from '../../terms/round.js';
import { StoreError, type Store } from '../store.js';
import { checkTime } from './checks.js';
import { fromJson, toJson } from './json.js';
import type { Session } from './session.js';

/** Puts a message into the outbox, due at once; for use inside a transaction. */
export function messageWriter({ db }: Session): (message: Message) => void {
  const insert = db.prepare<[string, string, number, string, number]>(
    `INSERT INTO messages (id, sender, created_at_ms, body, state, next_attempt_ms)
     VALUES (?, ?, ?, ?, 'due', ?) ON CONFLICT DO NOTHING`,
  );
  return (message) => {
    const { id, sender, createdAtMs } = message;
    checkTime(createdAtMs, () => `the time at which message ${id} was made`);
    if (insert.run(id, sender, createdAtMs, toJson(message), createdAtMs).changes > 0) return;
    throw new StoreError(
      `message ${id} to ${sender} is in the outbox already; see whether two processes judge ` +
        'with the same store, and stop one of them',
    );
  };
}

/** Adds to what waits for the sender's next digest; for use inside a transaction. */
export function digestWriter({ db }: Session): (entry: DigestEntry) => void {
  const insert = db.prepare<[string, string, string, number]>(
    'INSERT INTO digest_entries (sender, alert_id, event, created_at_ms) VALUES (?, ?, ?, ?)',
  );
  return ({ sender, alertId, event, createdAtMs }) => {
    checkTime(createdAtMs, () => `the time of the digest entry of alert ${alertId}`);
    insert.run(sender, alertId, event, createdAtMs);
  };
}

type Outcome = 'delivered' | 'failed' | 'gave-up';

/** Counts the outcome and names the sender; refuses a message that is not waiting. */
function outcomeCounter({ db, path }: Session): (messageId: string, outcome: Outcome) => void {
  const select = db
    .prepare<[string], string>(`SELECT sender FROM messages WHERE id = ? AND state = 'due'`)
    .pluck();
  const add = db.prepare<[string, Outcome]>(
    `INSERT INTO delivery_totals (sender, outcome, count) VALUES (?, ?, 1)
     ON CONFLICT DO UPDATE SET count = count + 1`,
  );
  return (messageId, outcome) => {
    const sender = select.get(messageId);
    if (sender === undefined) {
      throw new StoreError(
        `message ${messageId} does not wait in the outbox of store ${path} (delivered or given ` +
          'up before?); see whether two processes send from the same store, and stop one of them',
      );
    }
    add.run(sender, outcome);
  };
}

type Attempts = Pick<Store, 'delivered' | 'deliveryFailed' | 'deliveryGivenUp'>;

function attemptMethods(session: Session): Attempts {
  const { db, write } = session;
  const count = outcomeCounter(session);
  const remove = db.prepare<[string]>('DELETE FROM messages WHERE id = ?');
  const postpone = db.prepare<[number, string, string]>(
    `UPDATE messages SET attempts = attempts + 1, next_attempt_ms = ?, last_error = ?
     WHERE id = ?`,
  );
  const giveUp = db.prepare<[string, string]>(
    `UPDATE messages SET state = 'given-up', last_error = ? WHERE id = ?`,
  );
  return {
    delivered: (messageId) =>
      write('note a delivery', () => {
        count(messageId, 'delivered');
        remove.run(messageId);
      }),
    deliveryFailed: (messageId, nextAttemptMs, error) =>
      write('note a failed delivery', () => {
        checkTime(nextAttemptMs, () => `the time of the next attempt at message ${messageId}`);
        count(messageId, 'failed');
        postpone.run(nextAttemptMs, error, messageId);
      }),
    deliveryGivenUp: (messageId, error) =>
      write('give up a message', () => {
        count(messageId, 'gave-up');
        giveUp.run(error, messageId);
      }),
  };
}

function digestMethods(session: Session): Pick<Store, 'digestEntries' | 'closeDigest'> {
  const select = session.db.prepare<[string], DigestEntry>(
    `SELECT sender, alert_id AS alertId, event, created_at_ms AS createdAtMs
     FROM digest_entries WHERE sender = ? ORDER BY sequence`,
  );
  const clear = session.db.prepare<[string, number]>(
    `DELETE FROM digest_entries WHERE sequence IN
     (SELECT sequence FROM digest_entries WHERE sender = ? ORDER BY sequence LIMIT ?)`,
  );
  const writeMessage = messageWriter(session);
  return {
    digestEntries: (sender) => session.read('read digest entries', () => select.all(sender)),
    closeDigest: (message, entries) =>
      session.write('close a digest', () => {
        clear.run(message.sender, entries);
        writeMessage(message);
      }),
  };
}

type OutboxMethod =
  keyof Attempts | 'waitingSenders' | 'waiting' | 'digestEntries' | 'closeDigest' | 'instanceId';

export function outboxMethods(session: Session): Pick<Store, OutboxMethod> {
  const senders = session.db
    .prepare<[], string>(`SELECT DISTINCT sender FROM messages WHERE state = 'due' ORDER BY sender`)
    .pluck();
  const waiting = session.db.prepare<
    [string, number],
    { body: string; attempts: number; nextAttemptMs: number }
  >(
    `SELECT body, attempts, next_attempt_ms AS nextAttemptMs FROM messages
     WHERE state = 'due' AND sender = ? ORDER BY created_at_ms, sequence LIMIT ?`,
  );
  const instance = session.db.prepare<[], string>('SELECT id FROM instance').pluck();
  return {
    ...attemptMethods(session),
    ...digestMethods(session),
    instanceId: () => session.read('read the instance', () => instance.get() ?? ''),
    waitingSenders: () => session.read('read the outbox', () => senders.all()),
    waiting: (sender, limit) =>
      session.read('read the outbox', () =>
        waiting.all(sender, limit).map(({ body, attempts, nextAttemptMs }): Delivery => {
          return { message: fromJson(body) as Message, attempts, nextAttemptMs };
        }),
      ),
  };
}
