import { expect, it } from 'vitest';
import { runScript, toolTimeoutMs } from './tools.js';

it('finds every file formatted as `npm run format` would', { timeout: toolTimeoutMs }, async () => {
  const { status, output } = await runScript('format:check');
  expect(status, output).toBe(0);
});
