import { RE2JS } from 're2js';
import type { DecodeReason, Decoder, FieldPath, FieldValue } from './types.js';

/**
 * Reads a record by a linear-time pattern: its named groups are the fields. The pattern may match
 * anywhere in the line unless it is anchored; a group that took no part in the match is missing,
 * and so is a path of more than one name.
 *
 * @throws when the pattern does not compile
 */
export function patternDecoder(pattern: string, wanted: readonly FieldPath[]): Decoder {
  return new PatternDecoder(RE2JS.compile(pattern), wanted);
}

class PatternDecoder implements Decoder {
  readonly fields: FieldValue[];
  private readonly pattern: RE2JS;
  /** Group number of each slot; -1 where the pattern has no such group. */
  private readonly groups: readonly number[];

  constructor(pattern: RE2JS, wanted: readonly FieldPath[]) {
    const named = new Map(Object.entries(pattern.namedGroups()));
    this.pattern = pattern;
    this.fields = wanted.map(() => null);
    this.groups = wanted.map(([name, ...rest]) =>
      name === undefined || rest.length > 0 ? -1 : (named.get(name) ?? -1),
    );
  }

  decode(bytes: Buffer, start: number, end: number): DecodeReason | null {
    const matcher = this.pattern.matcher(bytes.toString('utf8', start, end));
    if (!matcher.find()) return 'no-match';
    this.groups.forEach((group, slot) => {
      this.fields[slot] = group < 0 ? null : matcher.group(group);
    });
    return null;
  }
}
