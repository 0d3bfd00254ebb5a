/** Path of a field, outermost name first. */
export type FieldPath = readonly string[];

/** What stands in a field's place when it holds an object or a list. */
export const NOT_SCALAR = Symbol('not a scalar');

/** The text of a value; null where it is missing; `NOT_SCALAR` where it cannot be a category. */
export type FieldValue = string | null | typeof NOT_SCALAR;

/** Why a record could not be read at all. */
export type DecodeReason = 'malformed' | 'no-match';

/**
 * Reads a record once and keeps the wanted fields only.
 *
 * A decoder reuses `fields` for the next record: whoever wants to keep the values copies them.
 */
export interface Decoder {
  /** Values of the last decoded record, in the order of the wanted paths. */
  readonly fields: readonly FieldValue[];
  /**
   * Decodes `bytes[start, end)`, valid UTF-8 without the line's end, into `fields`.
   *
   * @returns null when the record was read, else why not (`fields` are then meaningless)
   */
  decode(bytes: Buffer, start: number, end: number): DecodeReason | null;
}
