import { timeParser } from '../clock/time.js';
import type { Config, MixConfig } from '../config/types.js';
import { CommandError, EXIT } from './ports.js';

const parseInstant = timeParser({ kind: 'iso' }, 'UTC');

/** An instant given on the command line; undefined stays undefined. */
function instantOption(name: string, text: string | undefined): number | undefined {
  if (text === undefined) return undefined;
  const ms = parseInstant(text);
  if (ms !== null) return ms;
  throw new CommandError(
    `${name} ${text}: not a time; write one as 2026-11-03T10:00:00Z`,
    EXIT.usage,
  );
}

/** A whole number given on the command line, within bounds. */
export function wholeOption(
  name: string,
  text: string,
  bounds: { readonly least: number; readonly most: number },
): number {
  const value = Number(text);
  const fits = /^\d+$/.test(text) && value >= bounds.least && value <= bounds.most;
  if (fits) return value;
  const range = `${String(bounds.least)} to ${String(bounds.most)}`;
  throw new CommandError(`${name} ${text}: write a whole number from ${range}`, EXIT.usage);
}

/** A span of event time given by --from and --to. */
export interface SpanOptions {
  readonly from?: string;
  readonly to?: string;
}

export interface QuerySpan {
  readonly fromMs?: number;
  readonly toMs?: number;
}

export function spanOption(options: SpanOptions): QuerySpan {
  const fromMs = instantOption('--from', options.from);
  const toMs = instantOption('--to', options.to);
  return {
    ...(fromMs === undefined ? {} : { fromMs }),
    ...(toMs === undefined ? {} : { toMs }),
  };
}

/** The mix named by --mix, or all of them. */
export function mixesOf(config: Pick<Config, 'mixes'>, name: string | undefined): MixConfig[] {
  const mixes = config.mixes.filter((mix) => mix.name === (name ?? mix.name));
  if (mixes.length > 0) return mixes;
  const known = config.mixes.map((mix) => mix.name).join(', ');
  throw new CommandError(`--mix ${name ?? ''}: no such mix; there is ${known}`, EXIT.usage);
}
