import { backToFormer, continued, raise, returned, settled } from '../alert/life.js';
import { shiftedReason, steadyReason } from '../alert/sentence.js';
import { reachMs } from '../judge/recipe.js';
import type { Alert, AlertEvent, Since } from '../terms/alert.js';
import type { Evidence } from '../terms/evidence.js';
import type { Alarm, Span, StrandMemory } from '../terms/recipe.js';
import type { VerdictName } from '../terms/verdict.js';
import type { Examined, Test } from './examine.js';

/** What the family decided about a strand's test. */
export interface Decision {
  readonly passes: boolean;
  readonly logThreshold: number;
}

export interface ConclusionInput {
  readonly examined: Examined;
  /** null when the strand was no member of the family. */
  readonly decision: Decision | null;
  /** When the shift began; needed only where a raise follows (`raises`). */
  readonly since: Since | null;
  /** The strand's alerts that this window may change, by id. */
  readonly alerts: ReadonlyMap<string, Alert>;
}

export interface Conclusion {
  readonly verdict: VerdictName;
  readonly reason: string;
  readonly evidence: Evidence | null;
  readonly memory: StrandMemory;
  /** Alerts raised or changed, and what to tell of them (null: nothing). */
  readonly changes: readonly { readonly alert: Alert; readonly tell: AlertEvent | null }[];
}

/** The test that a family judges: the window's own, or in alarm the one since the raise. */
export function familyTest(examined: Examined): Test | null {
  if (examined.memory.alarm !== null) return examined.again;
  return examined.finding.kind === 'tested' ? examined.finding.test : null;
}

/** Whether a decision raises an alert. */
export function raises(examined: Examined, decision: Decision | null): boolean {
  const test = familyTest(examined);
  if (test === null || decision === null || examined.backToFormer) return false;
  return decision.passes && test.tested.overTolerance;
}

/** Old state and what was found give the verdict, the new state and the alerts. Pure. */
export function conclude(input: ConclusionInput): Conclusion {
  const { examined, decision } = input;
  if (raises(examined, decision)) return concludeRaise(input);
  const alarm = examined.memory.alarm;
  return alarm === null ? concludeAtRest(input) : concludeInAlarm(input, alarm);
}

function concludeAtRest(input: ConclusionInput): Conclusion {
  const { examined, decision } = input;
  const { finding } = examined;
  const back = examined.backToFormer ? restoreFormer(input) : null;
  const memory = back?.memory ?? examined.memory;
  const changes = back?.changes ?? [];
  if (finding.kind !== 'tested') return { ...untested(finding), memory, changes };
  const evidence = withThreshold(finding.test.tested.evidence, decision);
  const reason =
    back === null ? steadyReason(evidence, decision?.passes ?? false) : 'back to the former mix';
  return { verdict: 'steady', reason, evidence, memory, changes };
}

function concludeInAlarm(input: ConclusionInput, alarm: Alarm): Conclusion {
  const { examined } = input;
  const { finding, ends } = examined;
  const { memory, changes } = ends === null ? unchanged(examined) : endAlarm(input, alarm, ends);
  if (finding.kind !== 'tested') {
    const told = ends === 'returned' ? untested(finding) : untestedInAlarm(finding);
    return { ...told, memory, changes };
  }
  const { evidence } = finding.test.tested;
  return ends === 'returned'
    ? { verdict: 'steady', reason: 'back at the reference', evidence, memory, changes }
    : { verdict: 'shifted', reason: shiftedReason(evidence), evidence, memory, changes };
}

function concludeRaise(input: ConclusionInput): Conclusion {
  const { examined, decision, since, alerts } = input;
  const { subject, memory } = examined;
  const test = familyTest(examined);
  if (test === null || since === null) throw new RangeError('a raise needs its test and its start');
  const evidence = withThreshold(test.tested.evidence, decision);
  const formerId = memory.alarm?.alertId ?? memory.returnedAlertId;
  const former = formerId === null ? undefined : alerts.get(formerId);
  const onProvisional = memory.alarm !== null && former?.provisional === true;
  const alert = raise({
    mix: subject.plan.mix.name,
    strand: subject.strand,
    kind: 'shift',
    window: subject.window,
    since,
    evidence,
    continues: former?.id ?? null,
    provisional: evidence.reference.provisional !== null || onProvisional,
    zone: subject.plan.mix.zone,
  });
  const tell = memory.alarm === null ? 'raised' : 'moved';
  const changes = [
    ...(former === undefined
      ? []
      : [{ alert: continued(former, subject.window.endMs, alert.id), tell: null }]),
    { alert, tell } as const,
  ];
  const alarm = alarmOf(examined, alert, since);
  const next = { ...memory, alarm, former: null, returnedAlertId: null };
  return { verdict: 'shifted', reason: shiftedReason(evidence), evidence, memory: next, changes };
}

/**
 * What the end of the alarm will be measured by. After moving again that is still the distance
 * from the reference frozen at the first raise, so that a full recovery ends the whole chain.
 */
function alarmOf(examined: Examined, alert: Alert, since: Since): Alarm {
  const { memory, finding, subject } = examined;
  const test = finding.kind === 'tested' ? finding.test : null;
  const recipe = memory.alarm?.recipe ?? memory.recipe;
  if (test === null || recipe === null) throw new RangeError('a raise needs a tested window');
  const { evidence, carriers, gateTolerance } = test.tested;
  return {
    alertId: alert.id,
    startMs: subject.window.startMs,
    endMs: subject.window.endMs,
    sinceEarliestMs: Math.min(since.earliestMs, memory.alarm?.sinceEarliestMs ?? Infinity),
    recipe,
    carriers,
    weightNow: evidence.weightNow,
    weightReference: evidence.weightReference,
    rho: evidence.rho,
    df2: evidence.df2 ?? null,
    tolerance: gateTolerance,
  };
}

function endAlarm(
  input: ConclusionInput,
  alarm: Alarm,
  how: 'returned' | 'settled',
): Pick<Conclusion, 'memory' | 'changes'> {
  const { memory, subject } = input.examined;
  const atMs = subject.window.endMs;
  const alert = input.alerts.get(alarm.alertId);
  if (alert === undefined) throw new RangeError(`alert ${alarm.alertId} is not stored`);
  const waits = alert.state === 'acknowledged' ? null : alert.id;
  const told = how === 'settled' ? settled(alert, atMs) : returned(alert, atMs, '');
  const changes = [{ alert: told, tell: how }];
  if (alert.provisional) {
    // A season not known yet looks like shifts: were they left out, it would never be known.
    return { memory: { ...memory, alarm: null, returnedAlertId: waits }, changes };
  }
  if (how === 'settled') {
    const former = { epochMs: memory.epochMs, excluded: memory.excluded, alarm };
    const next = { ...memory, alarm: null, former, returnedAlertId: waits, recipe: null };
    return { memory: { ...next, epochMs: alarm.startMs, excluded: [] }, changes };
  }
  const next = { ...memory, alarm: null, returnedAlertId: waits };
  const span = { fromMs: alarm.sinceEarliestMs, toMs: atMs };
  return { memory: exclude(next, span, input.examined), changes };
}

/** The reference before the shift that settled is put back; the time between never enters one. */
function restoreFormer(input: ConclusionInput): Pick<Conclusion, 'memory' | 'changes'> {
  const { memory, subject } = input.examined;
  const { former } = memory;
  if (former === null) throw new RangeError('no former mix to go back to');
  const atMs = subject.window.endMs;
  const alert = input.alerts.get(former.alarm.alertId);
  const restored: StrandMemory = {
    ...memory,
    epochMs: former.epochMs,
    excluded: former.excluded,
    recipe: { ...former.alarm.recipe, step: memory.recipe?.step ?? former.alarm.recipe.step },
    former: null,
  };
  const span = { fromMs: former.alarm.sinceEarliestMs, toMs: atMs };
  return {
    memory: exclude(restored, span, input.examined),
    changes: alert === undefined ? [] : [{ alert: backToFormer(alert, atMs), tell: 'returned' }],
  };
}

/**
 * Adds a span in alarm, and drops those that no recipe can reach any more. The recipe in use may
 * reach into the span too: a shift can have begun before its last step.
 */
function exclude(memory: StrandMemory, span: Span, examined: Examined): StrandMemory {
  const { plan, window } = examined.subject;
  const horizonMs = window.startMs - reachMs(plan.mix, plan.calendar);
  const kept = memory.excluded.filter((e) => e.toMs > horizonMs);
  const { recipe } = memory;
  return {
    ...memory,
    excluded: [...kept, span],
    recipe: recipe === null ? null : { ...recipe, excluded: [...recipe.excluded, span] },
  };
}

function unchanged(examined: Examined): Pick<Conclusion, 'memory' | 'changes'> {
  return { memory: examined.memory, changes: [] };
}

function untested(
  finding: Exclude<Examined['finding'], { kind: 'tested' }>,
): Pick<Conclusion, 'verdict' | 'reason' | 'evidence'> {
  const verdict = finding.kind === 'untestable' ? 'steady' : finding.kind;
  return { verdict, reason: finding.reason, evidence: null };
}

/** A window in alarm that cannot be tested, though it has the events, is no sign of an end. */
function untestedInAlarm(finding: Parameters<typeof untested>[0]): ReturnType<typeof untested> {
  const told = untested(finding);
  if (finding.kind === 'thin' || finding.kind === 'silent') return told;
  return { ...told, verdict: 'shifted', reason: `still in alarm; ${finding.reason}` };
}

function withThreshold(evidence: Evidence, decision: Decision | null): Evidence {
  if (decision === null) return evidence;
  const { logThreshold } = decision;
  return { ...evidence, threshold: Math.exp(logThreshold), logThreshold };
}
