/** Numbers as people read them: shares in percent, differences in points, p as odds. */

const LOG_BILLIONTH = Math.log(1e-9);

/** A share 0..1 in percent: one decimal, or one significant digit below one percent. */
export function percent(share: number): string {
  return `${digits(Math.abs(share) * 100)} %`;
}

/** A difference of shares, signed, in percentage points. */
export function points(difference: number): string {
  const sign = difference < 0 ? '-' : '+';
  const size = digits(Math.abs(difference) * 100);
  return `${sign}${size} ${size === '1' ? 'point' : 'points'}`;
}

/**
 * How often chance alone would show as much, from a natural log of p: "about once in 4,000
 * windows", or "7 times in 10". Never says "never".
 */
export function chance(logP: number, noun = 'windows'): string {
  if (logP <= LOG_BILLIONTH) return `less than once in a billion ${noun}`;
  const p = Math.exp(logP);
  if (p >= 0.15) return `${Math.min(9, Math.round(p * 10)).toFixed(0)} times in 10`;
  const times = 1 / p;
  const scale = 10 ** Math.floor(Math.log10(times));
  return `about once in ${grouped(Math.round(times / scale) * scale)} ${noun}`;
}

/** `1 window`, `2,016 windows`: for nouns whose plural takes an s. */
export function counted(n: number, noun: string): string {
  return `${grouped(n)} ${n === 1 ? noun : `${noun}s`}`;
}

/** Whole numbers with a comma between thousands. */
export function grouped(n: number): string {
  return String(Math.round(n)).replace(/\B(?=(\d{3})+$)/g, ',');
}

function digits(value: number): string {
  if (value === 0) return '0';
  if (value < 0.01) return 'under 0.01';
  if (value < 1) return String(Number(value.toPrecision(1)));
  return String(Number(value.toFixed(1)));
}
