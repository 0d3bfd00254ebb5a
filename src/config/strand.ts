import type { StrandKey } from '../terms/tally.js';

/** Made categories: what is over the cap, an absent value, what was pooled in a table. */
export const REST = '(rest)';
export const MISSING = '(missing)';
export const POOLED = '(pooled)';

/** The strand of a whole mix. */
export const WHOLE: StrandKey = 'all';

/**
 * A real value as category text. One that begins with `(` gets a backslash, so that it is never
 * taken for a made category; one that already looks so escaped gets another, so that
 * `unescapeCategory` gives every value back. All other values stay as they are.
 */
export function escapeCategory(text: string): string {
  return /^\\*\(/.test(text) ? `\\${text}` : text;
}

/** The real value behind a category text; made categories stay as they are. */
export function unescapeCategory(category: string): string {
  return /^\\+\(/.test(category) ? category.slice(1) : category;
}

/**
 * Text form of a strand: `field=value` pairs by field in code-point order, joined by commas; `all`
 * without any. Values are category texts (made by `escapeCategory`, or `MISSING`).
 */
export function strandKey(values: readonly (readonly [string, string])[]): StrandKey {
  if (values.length === 0) return WHOLE;
  const sorted = values.toSorted(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
  return sorted.map(([field, value]) => `${escapeKey(field)}=${escapeKey(value)}`).join(',');
}

/**
 * Fields and category texts of a strand key, fields in the key's order; `{}` for the whole.
 * Throws RangeError for a text that `strandKey` does not write.
 */
export function parseStrandKey(key: StrandKey): Record<string, string> {
  if (key === WHOLE) return {};
  const pairs = splitAt(key, ',').map((pair) => splitAt(pair, '='));
  return Object.fromEntries(
    pairs.map((pair) => {
      const [field, value] = pair;
      if (pair.length !== 2 || field === undefined || value === undefined) {
        throw new RangeError(
          `strand "${key}" is not all or field=value,...; write e.g. region=north`,
        );
      }
      return [unescapeKey(field), unescapeKey(value)];
    }),
  );
}

function escapeKey(text: string): string {
  return text.replace(/[\\,=]/g, '\\$&');
}

function unescapeKey(text: string): string {
  return text.replace(/\\(.)/gs, '$1');
}

/** Splits at the separators that no backslash precedes; the parts stay escaped. */
function splitAt(text: string, separator: ',' | '='): string[] {
  const parts: string[] = [];
  let start = 0;
  for (let at = 0; at < text.length; at += 1) {
    if (text[at] === '\\') at += 1;
    else if (text[at] === separator) {
      parts.push(text.slice(start, at));
      start = at + 1;
    }
  }
  return [...parts, text.slice(start)];
}
