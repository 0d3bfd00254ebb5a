import { readFileSync } from 'node:fs';

/** The program's version, from its own package.json. */
export function programVersion(): string {
  const text = readFileSync(new URL('../../package.json', import.meta.url), 'utf8');
  const parsed: unknown = JSON.parse(text);
  const version = isRecord(parsed) ? parsed['version'] : undefined;
  return typeof version === 'string' ? version : 'unknown';
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null;
}
