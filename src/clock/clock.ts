/** The only way the program learns the time or waits. Passed in, so that replay is exact. */
export interface Clock {
  /** Real or virtual time, epoch milliseconds UTC. */
  nowMs(): number;
}

/** The one place in the program that reads the machine's clock. */
export const systemClock: Clock = { nowMs: () => Date.now() };

/** The one place that draws chance: jitter of retries, nothing that a verdict depends on. */
export const systemRandom = (): number => Math.random();
