import { type BudgetShare } from '../alert/budget.js';
import { decideFamily, type FamilyOutcome } from '../alert/decideFamily.js';
import type { SenderConfig } from '../config/types.js';
import { total } from '../judge/counts.js';
import type { Alert } from '../terms/alert.js';
import type { FamilyNote, RoundCommit } from '../terms/round.js';
import type { StrandKey } from '../terms/tally.js';
import type { Verdict } from '../terms/verdict.js';
import { conclude, type Conclusion, type Decision, familyTest, raises } from './conclude.js';
import { type Examined, examine, type Subject } from './examine.js';
import { type News, outgoing } from './outgoing.js';
import type { Past } from './past.js';
import { findSince } from './start.js';

/** Everything that judging one batch depends on. */
export interface BatchInput {
  readonly endMs: number;
  readonly number: number;
  readonly mixes: readonly string[];
  /** In order of mix (as configured), then strand key. */
  readonly subjects: readonly Subject[];
  readonly forgotten: readonly { readonly mix: string; readonly strand: StrandKey }[];
  readonly shares: readonly BudgetShare[];
  /** Strands of the instant judged in earlier batches or still to come, by budget. */
  readonly elsewhere: ReadonlyMap<string, number>;
  /** Strands alive, by budget. */
  readonly active: ReadonlyMap<string, number>;
  /** Alerts that are not in state normal, by id. */
  readonly alerts: ReadonlyMap<string, Alert>;
  /** Alerts closed because their strand was forgotten, already ended. */
  readonly closed: readonly Alert[];
  /** Event time at which the windows of a mix could first be judged. */
  readonly judgeableMs: ReadonlyMap<string, number>;
  readonly past: Past;
  readonly nowMs: number;
  readonly senders: readonly SenderConfig[];
  readonly configDigest: string;
  readonly version: string;
  /** Lets other work of the process have its turn. */
  readonly breathe: () => Promise<void>;
}

/** Strands judged between two breaths: a few milliseconds. */
const STRANDS_A_BREATH = 16;

/** Judges all strands of a batch as one family and gives everything the round leaves behind. */
export async function judgeBatch(input: BatchInput): Promise<RoundCommit> {
  const examined: Examined[] = [];
  for (const [at, subject] of input.subjects.entries()) {
    if (at % STRANDS_A_BREATH === 0) await input.breathe();
    examined.push(await examine(subject, input.past));
  }
  const { decisions, families } = decide(examined, input);
  const conclusions: Conclusion[] = [];
  for (const one of examined) {
    const decision = decisions.get(one) ?? null;
    const since = raises(one, decision) ? await findSince(one, input.past) : null;
    conclusions.push(conclude({ examined: one, decision, since, alerts: input.alerts }));
  }
  return assemble(input, examined, conclusions, families);
}

function decide(
  examined: readonly Examined[],
  input: BatchInput,
): { decisions: Map<Examined, Decision>; families: FamilyNote[] } {
  const decisions = new Map<Examined, Decision>();
  const families: FamilyNote[] = [];
  for (const share of input.shares) {
    const members = examined.filter(
      (one) => familyTest(one) !== null && share.roundsPerWeek.has(one.subject.plan.mix.name),
    );
    const outcome = decideShare(share, members, input);
    members.forEach((one, at) => {
      const decision = outcome.decisions[at];
      if (decision !== undefined) decisions.set(one, decision);
    });
    if (input.mixes.some((mix) => share.roundsPerWeek.has(mix))) families.push(outcome.note);
  }
  return { decisions, families };
}

function decideShare(
  share: BudgetShare,
  members: readonly Examined[],
  input: BatchInput,
): FamilyOutcome {
  const tests = members.map((one) => ({
    mix: one.subject.plan.mix.name,
    logP: familyTest(one)?.tested.evidence.logP ?? 0,
  }));
  return decideFamily(share, tests, {
    elsewhere: input.elsewhere.get(share.budget) ?? 0,
    active: input.active.get(share.budget) ?? 0,
  });
}

function assemble(
  input: BatchInput,
  examined: readonly Examined[],
  conclusions: readonly Conclusion[],
  families: readonly FamilyNote[],
): RoundCommit {
  const changes = conclusions.flatMap((c) => c.changes);
  const closed = input.closed.map((alert) => ({ alert, tell: 'returned' }) as const);
  const news = [...closed, ...changes].flatMap(({ alert, tell }): News[] =>
    tell === null ? [] : [{ alert, event: tell }],
  );
  return {
    batch: { endMs: input.endMs, number: input.number, mixes: input.mixes, families },
    verdicts: examined.map((one, at) => verdictOf(input, one, conclusions[at])),
    strands: examined.map(({ subject }, at) => ({
      mix: subject.plan.mix.name,
      strand: subject.strand,
      state: conclusions[at]?.memory ?? subject.memory,
    })),
    forgotten: input.forgotten,
    alerts: [...input.closed, ...changes.map((change) => change.alert)],
    ...outgoing(news, input.senders, input),
  };
}

function verdictOf(
  input: BatchInput,
  examined: Examined,
  conclusion: Conclusion | undefined,
): Verdict {
  const { subject } = examined;
  if (conclusion === undefined) throw new RangeError('a window was left without a conclusion');
  return {
    mix: subject.plan.mix.name,
    strand: subject.strand,
    window: subject.window,
    verdict: conclusion.verdict,
    events: total(subject.counts),
    reason: conclusion.reason,
    evidence: conclusion.evidence,
    configDigest: input.configDigest,
    version: input.version,
  };
}
