interface MediaRange {
  readonly type: string;
  /** Weight 0..1. */
  readonly q: number;
}

/** More ranges than this are not looked at; the header itself is bounded by the server. */
const maxRanges = 32;

/**
 * Whether an `Accept` header asks for OpenMetrics: it must name `application/openmetrics-text`, and
 * not put plain text above it. A wildcard never means OpenMetrics, since text 0.0.4 is the default.
 *
 * Source: RFC 9110 (Fielding, Nottingham and Reschke, 2022), sections 12.4.2 and 12.5.1.
 */
export function prefersOpenMetrics(accept: string | undefined): boolean {
  const ranges = (accept ?? '').split(',', maxRanges).map(readRange);
  const openMetrics = weight(ranges, 'application/openmetrics-text') ?? 0;
  const text =
    weight(ranges, 'text/plain') ?? weight(ranges, 'text/*') ?? weight(ranges, '*/*') ?? 0;
  return openMetrics > 0 && openMetrics >= text;
}

/** The best weight given to a type: it may be named more than once, with other versions. */
function weight(ranges: readonly MediaRange[], type: string): number | null {
  const weights = ranges.filter((range) => range.type === type).map(({ q }) => q);
  return weights.length === 0 ? null : Math.max(...weights);
}

function readRange(text: string): MediaRange {
  const [type = '', ...parameters] = text.split(';').map((part) => part.trim().toLowerCase());
  const written = parameters.map((part) => /^q\s*=\s*(.*)$/.exec(part)?.[1]);
  return { type, q: readWeight(written.find((value) => value !== undefined)) };
}

/** An absent or unreadable weight counts as 1, and one out of range as the nearest limit. */
function readWeight(text: string | undefined): number {
  if (text === undefined || !/^\d+(\.\d*)?$|^\.\d+$/.test(text)) return 1;
  return Math.min(Number(text), 1);
}
