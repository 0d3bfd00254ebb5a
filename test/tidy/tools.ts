import { spawn } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { join, relative } from 'node:path';
import { fileURLToPath } from 'node:url';

/** The top of the project. */
export const root = fileURLToPath(new URL('../../', import.meta.url));

/** How long one tool may take on a busy machine before its test fails. */
export const toolTimeoutMs = 180_000;

const maxOutputChars = 20_000;

/** What a finished process said and how it ended. */
export interface Ended {
  readonly status: number | null;
  readonly output: string;
}

/**
 * Runs a program in `cwd` (the top of the project) and gathers what it prints on either stream,
 * the last 20,000 characters of it. Rejects when the program cannot be started.
 */
export function run(program: string, args: readonly string[], cwd = root): Promise<Ended> {
  return new Promise((resolve, reject) => {
    const env = { ...process.env, NO_COLOR: '1', FORCE_COLOR: '0' };
    const child = spawn(program, args, { cwd, env, stdio: ['ignore', 'pipe', 'pipe'] });
    let output = '';
    const keep = (chunk: string) => (output = (output + chunk).slice(-maxOutputChars));
    child.stdout.setEncoding('utf8').on('data', keep);
    child.stderr.setEncoding('utf8').on('data', keep);
    child.on('error', reject);
    child.on('close', (status) => resolve({ status, output }));
  });
}

/** Runs one script of package.json, so that a person and the test run the very same command. */
export const runScript = (name: string): Promise<Ended> => run('npm', ['run', '--silent', name]);

const notOurs = new Set(['node_modules', 'dist', 'var', 'coverage', '.git']);

function* walk(folder: string): Generator<string> {
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    if (notOurs.has(entry.name)) continue;
    const path = join(folder, entry.name);
    if (entry.isDirectory()) yield* walk(path);
    else if (entry.isFile()) yield path;
  }
}

/** A text file of the project; `path` is relative to its top, with forward slashes. */
export interface TextFile {
  readonly path: string;
  readonly text: string;
}

/** Every text file of the project in the order of its path; what holds a NUL is not text. */
export function textFiles(): TextFile[] {
  const paths = [...walk(root)].sort();
  return paths
    .map((path) => ({
      path: relative(root, path).replaceAll('\\', '/'),
      text: readFileSync(path, 'utf8'),
    }))
    .filter(({ text }) => !text.includes('\0'));
}
