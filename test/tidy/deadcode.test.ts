import { expect, it } from 'vitest';
import { runScript, toolTimeoutMs } from './tools.js';

it('finds no file, export or package that nothing uses', { timeout: toolTimeoutMs }, async () => {
  const { status, output } = await runScript('deadcode');
  expect(status, output).toBe(0);
});
