import { requirePositive } from './preconditions.js';

/** Creep's part of the budget of false alarms. */
const BUDGET_SHARE = 0.2;
/** A budget is no licence: not more than one false alarm in so many windows. */
const LEAST_RUN = 1000;

/**
 * The alarm threshold c of a creep detector: windows wanted between false alarms of one strand.
 *
 * c = max(m T / (.20 b), 1000) for m strands that share a budget of b false alarms a week, each
 * judged T times a week. In: all > 0 and finite. Out: >= 1000; the alarm is due once log D
 * reaches log(c). Refuses other input with RangeError. (Own; the bound is that of
 * `shiryaevRoberts`.)
 */
export function creepThreshold(input: {
  readonly strands: number;
  readonly windowsPerWeek: number;
  readonly falseAlarmsPerWeek: number;
}): number {
  const { strands, windowsPerWeek, falseAlarmsPerWeek } = input;
  requirePositive('strands', strands);
  requirePositive('windowsPerWeek', windowsPerWeek);
  requirePositive('falseAlarmsPerWeek', falseAlarmsPerWeek);
  return Math.max((strands * windowsPerWeek) / (BUDGET_SHARE * falseAlarmsPerWeek), LEAST_RUN);
}
