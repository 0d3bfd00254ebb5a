const MOST_DECIMALS = 15;

/** A number without a sign at the end of a CSV line. */
const LAST_NUMBER = /(?<=,)(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?(?=\r?$)/gm;

/**
 * Writes the shares of `category,share` lines as whole numbers in the same proportion, so that
 * they can be read as counts are. Shares such as 0.4 stay exact; what needs more than 15 digits
 * is rounded to them. Lines that end in no number stay as they are, for the reader to refuse.
 */
export function wholeShares(text: string): string {
  const written = text.match(LAST_NUMBER) ?? [];
  const largest = written.reduce((most, number) => Math.max(most, Number(number)), 0);
  let decimals = written.reduce((most, number) => Math.max(most, decimalsOf(number)), 0);
  while (decimals > 0 && largest * 10 ** decimals > Number.MAX_SAFE_INTEGER) decimals--;
  if (decimals === 0) return text;
  return text.replace(LAST_NUMBER, (number) =>
    Math.round(Number(number) * 10 ** decimals).toFixed(0),
  );
}

function decimalsOf(number: string): number {
  if (/[eE]/.test(number)) return MOST_DECIMALS;
  return Math.min(number.split('.')[1]?.length ?? 0, MOST_DECIMALS);
}
