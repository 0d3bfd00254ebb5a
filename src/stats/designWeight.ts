/**
 * Effective events of a window: N / (1 + (N - 1) rho), the count divided by its design effect.
 * In: events >= 0, rho in [0, 1). Out: in [0, events].
 */
export function designWeight(events: number, rho: number): number {
  return events === 0 ? 0 : events / (1 + Math.max(0, events - 1) * rho);
}
