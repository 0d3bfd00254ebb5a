import { inflateRawSync } from 'node:zlib';
import type { Evidence } from '../../terms/evidence.js';
import type { Verdict, VerdictName } from '../../terms/verdict.js';
import { StoreError, type Store } from '../store.js';
import { timeText } from './checks.js';
import { fromJson } from './json.js';
import type { Session } from './session.js';

/** Verdicts read at once while streaming. */
const PAGE = 500;

interface Row {
  mix: string;
  strand: string;
  start_ms: number;
  end_ms: number;
  verdict: VerdictName;
  events: number;
  reason: string;
  digest: string;
  version: string;
  evidence: Buffer | null;
}

const COLUMNS = `m.name AS mix, s.name AS strand, v.start_ms, v.end_ms, v.verdict, v.events,
  v.reason, c.digest, v.version, v.evidence`;

function readEvidence(row: Row): Evidence | null {
  if (row.evidence === null) return null;
  try {
    return fromJson(inflateRawSync(row.evidence).toString('utf8')) as Evidence;
  } catch (error) {
    throw new StoreError(
      `the evidence of mix ${row.mix}, strand ${row.strand}, window to ${timeText(row.end_ms)} ` +
        'is damaged; put back the last backup',
      { cause: error },
    );
  }
}

function toVerdict(row: Row): Verdict {
  return {
    mix: row.mix,
    strand: row.strand,
    window: { startMs: row.start_ms, endMs: row.end_ms },
    verdict: row.verdict,
    events: row.events,
    reason: row.reason,
    evidence: readEvidence(row),
    configDigest: row.digest,
    version: row.version,
  };
}

type VerdictQuery = Parameters<Store['verdicts']>[0];

/** First end of a window with verdicts after the one given; null after the last. */
function nextEnd({ db }: Session): (afterMs: number, mix: string | undefined) => number | null {
  // One look into the key of each mix: their numbers of windows do not matter.
  const select = db
    .prepare<{ afterMs: number; mix: string | null }, number | null>(
      `SELECT min(next) FROM (
         SELECT (SELECT min(v.end_ms) FROM verdicts v WHERE v.mix_id = m.id AND v.end_ms > @afterMs)
           AS next FROM mixes m WHERE @mix IS NULL OR m.name = @mix)`,
    )
    .pluck();
  return (afterMs, mix) => select.get({ afterMs, mix: mix ?? null }) ?? null;
}

/** One page of the verdicts at one end, in order of mix and strand, after the pair given. */
type PageAt = (endMs: number, query: VerdictQuery, after: readonly [string, string]) => Row[];

interface PageParameters {
  endMs: number;
  mix: string | null;
  afterMix: string;
  afterStrand: string;
  fromMs: number;
  limit: number;
}

function pageSelector({ db }: Session): PageAt {
  const select = db.prepare<PageParameters, Row>(
    `SELECT ${COLUMNS}
     FROM mixes m
       CROSS JOIN verdicts v ON v.mix_id = m.id AND v.end_ms = @endMs
       CROSS JOIN strands s ON s.id = v.strand_id
       CROSS JOIN configs c ON c.id = v.config_id
     WHERE (@mix IS NULL OR m.name = @mix) AND (m.name, s.name) > (@afterMix, @afterStrand)
       AND v.start_ms >= @fromMs
     ORDER BY m.name, s.name LIMIT @limit`,
  );
  return (endMs, { mix, fromMs }, [afterMix, afterStrand]) => {
    const place = { endMs, mix: mix ?? null, afterMix, afterStrand };
    return select.all({ ...place, fromMs: fromMs ?? Number.MIN_SAFE_INTEGER, limit: PAGE });
  };
}

function stream(session: Session): (query: VerdictQuery) => AsyncGenerator<Verdict> {
  const endAfter = nextEnd(session);
  const pageAt = pageSelector(session);
  const doing = 'read verdicts';
  return async function* (query) {
    const lastMs = query.toMs ?? Number.MAX_SAFE_INTEGER;
    let afterMs = query.fromMs ?? Number.MIN_SAFE_INTEGER;
    for (;;) {
      const endMs = await session.read(doing, () => endAfter(afterMs, query.mix));
      if (endMs === null || endMs > lastMs) return;
      let after: readonly [string, string] = ['', ''];
      for (;;) {
        const page = await session.read(doing, () => pageAt(endMs, query, after));
        for (const row of page) yield await session.read(doing, () => toVerdict(row));
        const last = page.at(-1);
        if (last === undefined || page.length < PAGE) break;
        after = [last.mix, last.strand];
      }
      afterMs = endMs;
    }
  };
}

export function verdictMethods(session: Session): Pick<Store, 'verdicts' | 'latestVerdicts'> {
  const latest = session.db.prepare<[], Row>(
    `SELECT ${COLUMNS}
     FROM strands s
       CROSS JOIN mixes m ON m.id = s.mix_id
       CROSS JOIN verdicts v
         ON v.mix_id = s.mix_id AND v.end_ms = s.verdict_end_ms AND v.strand_id = s.id
       CROSS JOIN configs c ON c.id = v.config_id
     WHERE s.verdict_end_ms IS NOT NULL ORDER BY m.name, s.name`,
  );
  return {
    verdicts: stream(session),
    latestVerdicts: () =>
      session.read('read the latest verdicts', () => latest.all().map(toVerdict)),
  };
}
