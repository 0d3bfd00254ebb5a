import { ESLint, Linter } from 'eslint';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { root, runScript, toolTimeoutMs } from './tools.js';

const ruleName = 'no-restricted-syntax';
const bansOf = z.object({
  rules: z.object({
    [ruleName]: z
      .array(z.unknown())
      .transform((rule) => rule as [2, ...{ selector: string; message: string }[]]),
  }),
});

/** The messages that our bans give for `code`, as if it stood in the file `path`. */
async function bansHit(path: string, code: string): Promise<string[]> {
  const eslint = new ESLint({ cwd: root, overrideConfigFile: join(root, '.eslint.config.js') });
  const config: unknown = await eslint.calculateConfigForFile(path);
  const rules = { [ruleName]: bansOf.parse(config).rules[ruleName] };
  return new Linter().verify(code, [{ rules }]).map((message) => message.message);
}

/** One line of code for each thing that would break replay. */
const breaksReplay = [
  'export const f = () => Date.now();',
  'export const f = () => new Date();',
  'export const f = () => Date();',
  'export const f = () => performance.now();',
  'export const f = () => Math.random();',
  'export const f = () => crypto.randomUUID();',
  "import { randomUUID as id } from 'node:crypto'; export const f = id;",
  'export const f = () => process.env.HOME;',
  "import { env } from 'node:process'; export const f = env;",
  'export const f = () => setTimeout(g, 5);',
  'export const f = () => setInterval(g, 5);',
  "import { setTimeout as wait } from 'node:timers/promises'; export const f = wait;",
  'export const f = (a, b) => a.localeCompare(b);',
  'start();',
  'await start();',
  "process.on('exit', stop);",
];

describe('the linter', { timeout: toolTimeoutMs }, () => {
  it('finds nothing in the whole project', async () => {
    const { status, output } = await runScript('lint');
    expect(status, output).toBe(0);
  });

  it.each(breaksReplay)('refuses %j in a room of the core', async (code) => {
    expect(await bansHit('src/judge/judgeWindow.ts', code)).toHaveLength(1);
  });

  it('lets a date be made from a number', async () => {
    const code = 'export const f = (ms) => new Date(ms).toISOString();';
    expect(await bansHit('src/judge/judgeWindow.ts', code)).toEqual([]);
  });

  it('lets a file fill a table of its own while it loads', async () => {
    const code = 'const table = new Uint8Array(256);\ntable.fill(1, 0, 32);\ntable[34] = 1;';
    expect(await bansHit('src/decode/json/scanner.ts', code)).toEqual([]);
  });

  it('lets clock.ts alone read the machine', async () => {
    const code = 'export const f = () => Date.now();';
    expect(await bansHit('src/clock/clock.ts', code)).toEqual([]);
    expect(await bansHit('src/clock/calendar.ts', code)).toHaveLength(1);
    expect(await bansHit('src/cli/main.ts', code)).toHaveLength(1);
  });

  it('lets the commands read the environment and start timers', async () => {
    const code = 'export const f = () => setTimeout(g, Number(process.env.WAIT_MS));';
    expect(await bansHit('src/cli/start.ts', code)).toEqual([]);
    expect(await bansHit('src/send/webhook.ts', code)).toHaveLength(2);
  });
});
