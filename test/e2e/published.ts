import { readFileSync } from 'node:fs';
import { expect } from 'vitest';

// Published tables with their sources: see test/published/published.json. `computed` there is a
// recomputation in R 4.2.2 with 15 digits, `expected_printed` is what stands in the source.
interface Check {
  readonly id: string;
  readonly inputs: Readonly<Record<string, unknown>>;
  readonly expected_printed?: Readonly<Record<string, unknown>>;
  readonly computed: Readonly<Record<string, unknown>>;
}

export const { checks } = JSON.parse(
  readFileSync(new URL('../published/published.json', import.meta.url), 'utf8'),
) as { readonly checks: readonly Check[] };

export function check(id: string): Check {
  const found = checks.find((one) => one.id === id);
  if (found === undefined) throw new Error(`published.json has no example ${id}`);
  return found;
}

/** Half a unit of the last printed digit, or of the 13th significant one where R computed it. */
export function expectPublished(
  ours: number,
  { expected_printed: printed, computed }: Check,
  key: string,
) {
  const text = printed?.[key];
  if (typeof text === 'string') {
    const [digits = '', exponent = '0'] = text.split('e');
    const decimals = digits.split('.')[1]?.length ?? 0;
    const half = 0.5 * 10 ** (Number(exponent) - decimals);
    expect(Math.abs(ours - Number(text))).toBeLessThanOrEqual(half * (1 + 1e-9));
  }
  const exact = Number(computed[key]);
  expect(Math.abs(ours - exact)).toBeLessThanOrEqual(5e-13 * Math.max(1, Math.abs(exact)));
}

/** The two samples of a table: its columns where it is K x 2, else its rows. */
export function samplesOf({ inputs }: Check): [number[], number[]] {
  const rows = inputs['rows'] as number[][] | undefined;
  if (rows === undefined) return [rats(inputs['ctrl']), rats(inputs['treat'])];
  if (rows.length === 2) return [rows[0], rows[1]];
  return [rows.map((row) => row[0]), rows.map((row) => row[1])];
}

/** Survivors and the rest of one group of litters. */
function rats(group: unknown): number[] {
  const { n, y } = group as { readonly n: number[]; readonly y: number[] };
  const sum = (values: number[]): number => values.reduce((a, b) => a + b, 0);
  return [sum(y), sum(n) - sum(y)];
}
