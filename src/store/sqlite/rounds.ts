import { deflateRawSync } from 'node:zlib';
import type {
  Batch,
  DigestEntry,
  FamilyNote,
  RoundCommit,
  StrandState,
} from '../../terms/round.js';
import type { Verdict } from '../../terms/verdict.js';
import { StoreError, type Store } from '../store.js';
import { alertWriter } from './alerts.js';
import { checkTime, checkWindow, timeText } from './checks.js';
import { configIds } from './configs.js';
import { fromJson, toJson } from './json.js';
import { digestWriter, messageWriter } from './outbox.js';
import type { Session } from './session.js';

/** Batches read at once while streaming. */
const PAGE = 500;

function batchWriter({ db, names }: Session): (batch: Batch) => void {
  const insert = db.prepare<[number, number, string, string]>(
    `INSERT INTO batches (end_ms, number, mixes, families) VALUES (?, ?, ?, ?)
     ON CONFLICT DO NOTHING`,
  );
  const noteJudged = db.prepare<{ endMs: number; mixId: number }>(
    'UPDATE mixes SET judged_to_ms = max(coalesce(judged_to_ms, @endMs), @endMs) WHERE id = @mixId',
  );
  return ({ endMs, number, mixes, families }) => {
    checkTime(endMs, () => `the end of batch ${number}`);
    if (insert.run(endMs, number, toJson(mixes), toJson(families)).changes === 0) {
      throw new StoreError(
        `batch ${number} of the round that ends at ${timeText(endMs)} is stored already; ` +
          'see whether two processes judge with the same store, and stop one of them',
      );
    }
    for (const mix of mixes) noteJudged.run({ endMs, mixId: names.mixId(mix) });
  };
}

function verdictWriter(session: Session): (verdict: Verdict) => void {
  const { db, names } = session;
  const configId = configIds(session);
  const insert = db.prepare(
    `INSERT INTO verdicts (mix_id, end_ms, strand_id, start_ms, verdict, events, reason,
                           config_id, version, evidence)
     VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?) ON CONFLICT DO NOTHING`,
  );
  const point = db.prepare<{ endMs: number; strandId: number }>(
    `UPDATE strands SET verdict_end_ms = max(coalesce(verdict_end_ms, @endMs), @endMs)
     WHERE id = @strandId`,
  );
  const addTotal = db.prepare<[number, string]>(
    `INSERT INTO verdict_totals (mix_id, verdict, count) VALUES (?, ?, 1)
     ON CONFLICT DO UPDATE SET count = count + 1`,
  );
  return (verdict) => {
    const { mix, strand, window, events, reason, version } = verdict;
    checkWindow(window, () => `the verdict on mix ${mix}, strand ${strand}`);
    const mixId = names.mixId(mix);
    const strandId = names.strandId(mixId, strand);
    const evidence =
      verdict.evidence === null ? null : deflateRawSync(Buffer.from(toJson(verdict.evidence)));
    const place = [mixId, window.endMs, strandId, window.startMs];
    const note = [verdict.verdict, events, reason, configId(verdict.configDigest), version];
    if (insert.run(...place, ...note, evidence).changes === 0) {
      throw new StoreError(
        `mix ${mix}, strand ${strand} already has a verdict on the window that ends at ` +
          `${timeText(window.endMs)}; a window gets one verdict: see whether two processes ` +
          'judge with the same store, and stop one of them',
      );
    }
    point.run({ endMs: window.endMs, strandId });
    addTotal.run(mixId, verdict.verdict);
  };
}

interface StateRows {
  keep(this: void, state: StrandState): void;
  forget(this: void, strand: { readonly mix: string; readonly strand: string }): void;
  all(): readonly StrandState[];
}

function stateRows({ db, names }: Session): StateRows {
  const keep = db.prepare<[number, string]>(
    'INSERT OR REPLACE INTO strand_states (strand_id, state) VALUES (?, ?)',
  );
  const forget = db.prepare<[number]>('DELETE FROM strand_states WHERE strand_id = ?');
  const unpoint = db.prepare<[number]>('UPDATE strands SET verdict_end_ms = NULL WHERE id = ?');
  const select = db.prepare<[], { mix: string; strand: string; state: string }>(
    `SELECT m.name AS mix, s.name AS strand, t.state
     FROM strand_states t JOIN strands s ON s.id = t.strand_id JOIN mixes m ON m.id = s.mix_id
     ORDER BY m.name, s.name`,
  );
  return {
    keep({ mix, strand, state }) {
      keep.run(names.strandId(names.mixId(mix), strand), toJson(state));
    },
    forget({ mix, strand }) {
      const mixId = names.findMix(mix);
      const strandId = mixId === null ? null : names.findStrand(mixId, strand);
      if (strandId === null) return;
      forget.run(strandId);
      unpoint.run(strandId);
    },
    all: () =>
      select.all().map(({ mix, strand, state }): StrandState => {
        return { mix, strand, state: fromJson(state) as StrandState['state'] };
      }),
  };
}

/** Everything a round leaves behind, written inside the transaction of the caller. */
function roundWriter(session: Session, states: StateRows): (round: RoundCommit) => void {
  const writeBatch = batchWriter(session);
  const writeVerdict = verdictWriter(session);
  const writeAlert = alertWriter(session);
  const writeMessage = messageWriter(session);
  const writeDigestEntry: (entry: DigestEntry) => void = digestWriter(session);
  return (round) => {
    writeBatch(round.batch);
    round.verdicts.forEach(writeVerdict);
    round.strands.forEach(states.keep);
    round.forgotten.forEach(states.forget);
    round.alerts.forEach(writeAlert);
    round.messages.forEach(writeMessage);
    round.digestEntries.forEach(writeDigestEntry);
  };
}

interface BatchRow {
  end_ms: number;
  number: number;
  mixes: string;
  families: string;
}

/** Streams stored batches in order of (end, number), a page at a time. */
function batchStream({ db, read }: Session): (fromMs?: number) => AsyncGenerator<Batch> {
  const select = db.prepare<[number, number, number], BatchRow>(
    `SELECT end_ms, number, mixes, families FROM batches
     WHERE (end_ms, number) > (?, ?) ORDER BY end_ms, number LIMIT ?`,
  );
  return async function* (fromMs) {
    let [endMs, number] = [fromMs ?? Number.MIN_SAFE_INTEGER, -1];
    for (;;) {
      const page = await read('read the batches', () => select.all(endMs, number, PAGE));
      for (const row of page) {
        [endMs, number] = [row.end_ms, row.number];
        const mixes = fromJson(row.mixes) as readonly string[];
        yield { endMs, number, mixes, families: fromJson(row.families) as readonly FamilyNote[] };
      }
      if (page.length < PAGE) return;
    }
  };
}

export function roundMethods(
  session: Session,
): Pick<Store, 'commitRound' | 'strandStates' | 'judgedTo' | 'batches'> {
  const states = stateRows(session);
  const writeRound = roundWriter(session, states);
  const judgedTo = session.db.prepare<[], { mix: string; endMs: number }>(
    `SELECT name AS mix, judged_to_ms AS endMs FROM mixes
     WHERE judged_to_ms IS NOT NULL ORDER BY name`,
  );
  return {
    commitRound: (round) => session.write('commit a round', () => writeRound(round)),
    strandStates: () => session.read('read the strand states', () => states.all()),
    judgedTo: () =>
      session.read('read how far the mixes are judged', () => {
        return new Map(judgedTo.all().map(({ mix, endMs }) => [mix, endMs]));
      }),
    batches: batchStream(session),
  };
}
