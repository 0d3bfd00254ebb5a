/** Half-open interval [startMs, endMs) of event time, epoch milliseconds UTC. */
export interface Window {
  readonly startMs: number;
  readonly endMs: number;
}

/** `sub-day`: a divisor of an hour or a day, aligned to local midnight of the mix's zone. */
export type WindowLength =
  | { readonly kind: 'sub-day'; readonly ms: number }
  | { readonly kind: 'day' }
  | { readonly kind: 'week'; readonly weekStarts: 'monday' | 'sunday' }
  | { readonly kind: 'month' };
