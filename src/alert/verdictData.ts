import { formatInstant } from '../clock/format.js';
import { parseStrandKey } from '../config/strand.js';
import type { Verdict } from '../terms/verdict.js';
import { evidenceData, type Json } from './alertData.js';

/** One verdict as published JSON, with its whole evidence; keys always in the same order. */
export function verdictData(verdict: Verdict): Json {
  return {
    mix: verdict.mix,
    strand: parseStrandKey(verdict.strand),
    window: {
      start: formatInstant(verdict.window.startMs),
      end: formatInstant(verdict.window.endMs),
    },
    verdict: verdict.verdict,
    events: verdict.events,
    reason: verdict.reason,
    evidence: verdict.evidence === null ? null : evidenceData(verdict.evidence),
    config: verdict.configDigest,
    version: verdict.version,
  };
}
