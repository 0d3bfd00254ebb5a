const firstDelayMs = 5_000;
const maxDelayMs = 15 * 60_000;

/** A message is tried at most this long after it was made (once at least, however old it is). */
export const giveUpAfterMs = 24 * 3_600_000;

/**
 * Wait before the next attempt: 5 s, doubled with every failure up to 15 min, of which a share
 * between a half and the whole is taken, so that many senders do not return in step.
 *
 * @param failures attempts that failed before this one, 0 or more.
 * @param random in [0, 1).
 * @returns milliseconds, whole.
 */
export function retryDelayMs(failures: number, random: number): number {
  const delayMs = Math.min(firstDelayMs * 2 ** failures, maxDelayMs);
  return Math.round(delayMs * (0.5 + random / 2));
}
