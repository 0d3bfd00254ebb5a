import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { onTestFinished } from 'vitest';

/** A folder of the running test's own, removed when the test has finished. */
export function ownFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), 'tallyward-store-'));
  onTestFinished(() => {
    rmSync(folder, { recursive: true, force: true });
  });
  return folder;
}
