import { readFileSync } from 'node:fs';
import { timeTools } from '../clock/timeTools.js';
import { formatProblem } from '../config/problems.js';
import { readConfig } from '../config/read.js';
import type { Config } from '../config/types.js';
import { CommandError, EXIT, type Ports } from './ports.js';

/** Reads and checks a configuration file; all its problems come as one message. */
export function loadConfig(file: string, ports: Pick<Ports, 'env'>): Config {
  const text = readText(file);
  const result = readConfig({ text, file, env: ports.env, readText, time: timeTools });
  if ('config' in result) return result.config;
  const lines = result.problems.map((problem) => formatProblem(file, problem));
  throw new CommandError(lines.join('\n'), EXIT.usage);
}

function readText(path: string): string {
  try {
    return readFileSync(path, 'utf8');
  } catch (error) {
    const why = error instanceof Error ? error.message : String(error);
    throw new CommandError(`${path}: cannot be read (${why}); give the path of a file`, EXIT.usage);
  }
}
