import { weigh as weighSamples } from '../judge/weigh.js';
import { plainJson } from '../alert/alertData.js';
import { wholeOption } from './options.js';
import { CommandError, EXIT, type Ports, printLine } from './ports.js';
import { readSample, type Sample, type SampleOptions } from './readSample.js';
import { weighText } from './weighText.js';

export interface WeighOptions extends SampleOptions {
  readonly declared?: boolean;
  readonly ordered?: string;
  readonly exact?: boolean;
  readonly monteCarlo?: string;
  readonly seed?: string;
  /** commander's form of --no-pooling */
  readonly pooling: boolean;
  readonly failOnShift?: string;
  readonly json?: boolean;
}

/** `weigh`: compares two samples once. Exit 1 only when --fail-on-shift asks for it. */
export async function weigh(
  beforePath: string,
  afterPath: string,
  options: WeighOptions,
  ports: Ports,
): Promise<number> {
  const limit = options.failOnShift === undefined ? 0 : probability(options.failOnShift);
  const test = testOf(options);
  const areShares = options.declared === true;
  const before = await readSample(beforePath, { ...options, areShares });
  const after = await readSample(afterPath, options);
  tellRejected(ports, beforePath, before);
  tellRejected(ports, afterPath, after);
  const comparison = compare(() =>
    weighSamples({
      before: before.counts,
      windows: before.windows,
      after: after.counts,
      declared: options.declared === true,
      ordered: options.ordered?.split(',') ?? null,
      pooling: options.pooling,
      test,
    }),
  );
  const json = options.json === true;
  printLine(ports.stdout, json ? JSON.stringify(plainJson(comparison)) : weighText(comparison));
  return comparison.p < limit ? EXIT.finding : EXIT.done;
}

function testOf(options: WeighOptions): Parameters<typeof weighSamples>[0]['test'] {
  refuseIdleOptions(options);
  if (options.monteCarlo === undefined) return options.exact === true ? 'exact' : 'auto';
  if (options.exact === true) {
    throw new CommandError('--exact and --monte-carlo exclude each other; give one', EXIT.usage);
  }
  if (options.seed === undefined) {
    throw new CommandError('--monte-carlo needs --seed, so that it can be repeated', EXIT.usage);
  }
  return {
    samples: wholeOption('--monte-carlo', options.monteCarlo, { least: 99, most: 10_000_000 }),
    seed: wholeOption('--seed', options.seed, { least: 0, most: 4_294_967_295 }),
  };
}

/** An option that would have no effect is a misunderstanding, and told. */
function refuseIdleOptions(options: WeighOptions): void {
  const given = options.exact === true || options.monteCarlo !== undefined;
  if (options.monteCarlo !== undefined && options.declared === true) {
    throw new CommandError('--monte-carlo needs two samples; leave out --declared', EXIT.usage);
  }
  if (given && options.window !== undefined) {
    throw new CommandError(
      '--exact and --monte-carlo take events as independent, --window does not; give one',
      EXIT.usage,
    );
  }
  if (options.window !== undefined && options.category === undefined) {
    throw new CommandError('--window needs logs; name their field with --category', EXIT.usage);
  }
  if (options.window !== undefined && options.declared === true) {
    throw new CommandError('--window needs a sample, not declared shares; give one', EXIT.usage);
  }
}

/** What the samples do not allow is the user's to mend, and told as such. */
function compare<T>(make: () => T): T {
  try {
    return make();
  } catch (error) {
    if (error instanceof RangeError) throw new CommandError(error.message, EXIT.usage);
    throw error;
  }
}

function tellRejected(ports: Ports, path: string, sample: Sample): void {
  if (sample.rejected === 0) return;
  printLine(ports.stderr, `${path}: ${String(sample.rejected)} records could not be counted`);
}

function probability(text: string): number {
  const p = Number(text);
  if (p > 0 && p <= 1) return p;
  throw new CommandError(`--fail-on-shift ${text}: write a probability, e.g. 0.001`, EXIT.usage);
}
