import { StoreError } from '../store.js';

/**
 * JSON for stored values. Plain JSON turns NaN and the infinities into null and loses the sign of
 * zero; a log p of minus infinity must come back as it was, or replay would differ. Such a number
 * is written `{"$number":"-Infinity"}`.
 */
const MARK = '$number';
const ODD_NUMBERS: ReadonlyMap<unknown, number> = new Map([
  ['NaN', NaN],
  ['Infinity', Infinity],
  ['-Infinity', -Infinity],
  ['-0', -0],
]);

function replace(key: string, value: unknown): unknown {
  if (typeof value === 'number') {
    if (Object.is(value, -0)) return { [MARK]: '-0' };
    return Number.isFinite(value) ? value : { [MARK]: String(value) };
  }
  const lossy =
    typeof value === 'bigint' ||
    typeof value === 'function' ||
    typeof value === 'symbol' ||
    value instanceof Map ||
    value instanceof Set;
  if (lossy) {
    throw new StoreError(
      `cannot store the value under '${key}': it is no plain JSON value; ` +
        'hand over objects, arrays, texts, numbers, booleans and null only',
    );
  }
  return value;
}

function revive(_key: string, value: unknown): unknown {
  if (typeof value !== 'object' || value === null || !(MARK in value)) return value;
  if (Object.keys(value).length !== 1) return value;
  return ODD_NUMBERS.get(value[MARK]) ?? value;
}

/**
 * Text of a plain value, such that `fromJson` gives an equal one back.
 * @throws StoreError for what JSON cannot hold (undefined, maps, sets, functions, big integers)
 */
export function toJson(value: unknown): string {
  const text = JSON.stringify(value, replace) as string | undefined;
  if (text === undefined) {
    throw new StoreError('cannot store undefined; hand over a plain JSON value, such as null');
  }
  return text;
}

/** Reads what `toJson` wrote. The caller names the type that it stored. */
export function fromJson(text: string): unknown {
  return text.includes(`"${MARK}"`) ? JSON.parse(text, revive) : JSON.parse(text);
}
