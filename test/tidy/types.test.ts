import { expect, it } from 'vitest';
import { runScript, toolTimeoutMs } from './tools.js';

it('finds no type error in sources, tests and tools', { timeout: toolTimeoutMs }, async () => {
  const { status, output } = await runScript('types');
  expect(status, output).toBe(0);
});
