import { expectedFalseAlarms, familyLevel } from '../alert/budget.js';
import { counted } from '../alert/words.js';
import { formatDuration, formatWindowLength } from '../clock/duration.js';
import type { MixConfig } from '../config/types.js';
import { type MixPlan, planMixes } from '../schedule/plan.js';
import { loadConfig } from './loadConfig.js';
import { EXIT, type Ports, printLine } from './ports.js';

export interface CheckOptions {
  readonly config: string;
  readonly json?: boolean;
}

/** `check`: says in words what a configuration will do, or everything that is wrong with it. */
export function check(options: CheckOptions, ports: Ports): number {
  const config = loadConfig(options.config, ports);
  const plans = planMixes(config);
  const shares = [...new Set(plans.map((plan) => plan.share))];
  const expected = expectedFalseAlarms(shares);
  if (options.json === true) {
    const mixes = plans.map((plan) => ({ mix: plan.mix.name, level: levelOf(plan) }));
    const notes = config.notes;
    printLine(ports.stdout, JSON.stringify({ mixes, expectedFalseAlarms: expected, notes }));
    return EXIT.done;
  }
  printLine(ports.stdout, `${config.file} is in order`);
  for (const plan of plans) printLine(ports.stdout, mixText(plan));
  for (const note of config.notes) printLine(ports.stdout, `note: ${note}`);
  printLine(ports.stdout, `false alarms to expect in a quiet week: ${short(expected)}`);
  return EXIT.done;
}

function mixText(plan: MixPlan): string {
  const { mix } = plan;
  const split = mix.split.length === 0 ? 'not split' : `split by ${fields(mix)}`;
  const { perWeek } = plan.calendar;
  const rounds = Number.isInteger(perWeek) ? counted(perWeek, 'round') : `${short(perWeek)} rounds`;
  return (
    `${mix.name}: ${mix.category.join('.')} of ${mix.from}, ${split}, windows of ` +
    `${formatWindowLength(mix.window)}, held against ${yardstickText(mix)}; ` +
    `${rounds} a week, each at level ${short(levelOf(plan))}; ` +
    `a window closes ${formatDuration(mix.latenessMs)} after its end`
  );
}

function fields(mix: MixConfig): string {
  return mix.split.map((path) => path.join('.')).join(', ');
}

function levelOf(plan: MixPlan): number {
  return familyLevel(plan.share.perWeek, plan.calendar.perWeek);
}

function yardstickText(mix: MixConfig): string {
  const { yardstick } = mix;
  switch (yardstick.kind) {
    case 'declared':
      return `${String(yardstick.shares.length)} declared shares`;
    case 'rolling':
      return `the last ${formatDuration(yardstick.lastMs)}`;
    case 'pinned':
      return 'a pinned span';
    case 'file':
      return `the counts of ${yardstick.path}`;
    case 'previous':
      return yardstick.windows === 1
        ? 'the window before'
        : `the ${String(yardstick.windows)} windows before`;
    case 'season':
      return `the same time of the last ${String(yardstick.keep)} ${yardstick.cycle}s`;
  }
}

function short(value: number): string {
  return String(Number(value.toPrecision(3)));
}
