import { timeTools } from '../../../src/clock/timeTools.js';
import { formatProblem } from '../../../src/config/problems.js';
import { readConfig } from '../../../src/config/read.js';
import type { ConfigResult } from '../../../src/config/read.js';
import type { Config, MixConfig } from '../../../src/config/types.js';

export interface Surroundings {
  readonly env?: Readonly<Record<string, string>>;
  /** Files by path. */
  readonly files?: Readonly<Record<string, string>>;
}

function read(text: string, { env = {}, files = {} }: Surroundings = {}): ConfigResult {
  const readText = (path: string): string => {
    const found = files[path];
    if (found === undefined) throw new Error('no such file');
    return found;
  };
  return readConfig({ text, file: 'c.yaml', env, readText, time: timeTools });
}

/** Messages without the file's name: `line:column: what; write`. */
export function problems(text: string, surroundings?: Surroundings): readonly string[] {
  const result = read(text, surroundings);
  if (!('problems' in result)) return [];
  return result.problems.map((problem) => formatProblem('', problem).slice(1));
}

/** The configuration; throws with all problems when there are any. */
export function config(text: string, surroundings?: Surroundings): Config {
  const result = read(text, surroundings);
  if ('config' in result) return result.config;
  throw new Error(problems(text, surroundings).join('\n'));
}

/** A small valid file whose pieces a test may replace; each piece stands on known lines. */
export function file(pieces: {
  /** Line 1. */
  readonly top?: string;
  /** Lines 4 to 6 by default: keys of the collector `gateway`, each with a line. */
  readonly collector?: readonly string[];
  /** After `from`, `category` on lines 9 and 10: line 11 on. */
  readonly mix?: readonly string[];
  readonly send?: readonly string[];
}): string {
  const { collector = ['tail: [a.ndjson]', 'decode: json', 'time: ts'], mix = [] } = pieces;
  const window = mix.some((line) => line.startsWith('window:')) ? [] : ['window: 5m'];
  return [
    pieces.top ?? '# nothing',
    'collectors:',
    '  gateway:',
    ...collector.map((line) => `    ${line}`),
    'mixes:',
    '  outcomes:',
    '    from: gateway',
    '    category: outcome',
    ...[...mix, ...window].map((line) => `    ${line}`),
    ...(pieces.send === undefined ? [] : ['send:', ...pieces.send.map((line) => `  ${line}`)]),
    '',
  ].join('\n');
}

/** The one mix of `file`, with these lines. */
export function mix(...lines: readonly string[]): MixConfig {
  const [only] = config(file({ mix: lines })).mixes;
  if (only === undefined) throw new Error('no mix');
  return only;
}
