import { formatLocal } from '../clock/format.js';
import type { Since } from '../terms/alert.js';
import type { Evidence, Mover } from '../terms/evidence.js';
import type { StrandKey } from '../terms/tally.js';
import { chance, grouped, percent, points } from './words.js';

/** Movers that a sentence names before it says how many more there are. */
const NAMED = 3;

/**
 * One sentence for a person: where, how much, since when, which categories, and what chance would
 * do. `zone` is the mix's own.
 */
export function shiftSentence(input: {
  readonly mix: string;
  readonly strand: StrandKey;
  readonly evidence: Evidence;
  readonly since: Since;
  readonly zone: string;
}): string {
  const { evidence } = input;
  return (
    `${placeName(input.mix, input.strand)}: the mix has shifted since about ` +
    `${formatLocal(input.since.estimateMs, input.zone)}; ${movedText(evidence)}: ` +
    `${moversText(evidence.movers)}. By chance: ${chance(evidence.logP)}.`
  );
}

/** `mix, field=value` or `mix, all strands together`. */
export function placeName(mix: string, strand: StrandKey): string {
  return strand === 'all' ? mix : `${mix}, ${strand}`;
}

/** Why a window that was tested is not an alert, with what it could not have seen. */
export function steadyReason(evidence: Evidence, passed: boolean): string {
  const limit = percent(evidence.moved.atMost);
  if (passed) return `moved, but not shown to exceed the tolerance (at most ${limit})`;
  return evidence.moved.atMost <= evidence.tolerance
    ? `within tolerance: at most ${limit} moved`
    : `no shift shown; up to ${limit} could have moved unseen`;
}

/** Why a window of a strand in alarm is what it is. */
export function shiftedReason(evidence: Evidence): string {
  return `${movedText(evidence)}: ${moversText(evidence.movers)}`;
}

function movedText(evidence: Evidence): string {
  const { estimate, atLeast } = evidence.moved;
  return `${percent(estimate)} of events changed category (at least ${percent(atLeast)})`;
}

function moversText(movers: readonly Mover[]): string {
  const blamed = movers.filter((m) => m.blamed);
  const shown = (blamed.length > 0 ? blamed : movers).slice(0, NAMED);
  const more = blamed.length - shown.length;
  const list = shown.map(moverText).join(', ');
  return more > 0 ? `${list} and ${grouped(more)} more` : list;
}

function moverText(m: Mover): string {
  const verb = m.difference < 0 ? 'fell' : 'rose';
  const change = `${verb} from ${percent(m.before)} to ${percent(m.after)}`;
  const [largest] = m.members ?? [];
  if (largest === undefined) return `${m.category} ${change} (${points(m.difference)})`;
  const share = `${percent(largest.before)} to ${percent(largest.after)}`;
  return `rare ones together ${change} (mostly ${largest.category}: ${share})`;
}
