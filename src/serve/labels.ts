import { createHash } from 'node:crypto';

const maxLength = 256;
const hashLength = 16;

/**
 * A label value of at most 256 UTF-16 units that UTF-8 can hold. What had to be changed ends in
 * `~` and 16 hex digits of a hash of the whole, so that long values that begin alike stay apart.
 */
export function boundedLabel(value: string): string {
  // Without surrogates, paired or lone, nothing can be ill formed: the common case, kept cheap.
  if (value.length <= maxLength && !/[\uD800-\uDFFF]/.test(value)) return value;
  const wellFormed = Buffer.from(value, 'utf8').toString('utf8');
  if (wellFormed === value && value.length <= maxLength) return value;
  const hash = createHash('sha256').update(Buffer.from(value, 'utf16le')).digest('hex');
  const head = wellFormed.slice(0, maxLength - hashLength - 1);
  // Cutting between the two halves of a pair would leave one that UTF-8 cannot hold.
  const whole = /[\uD800-\uDBFF]$/.test(head) ? head.slice(0, -1) : head;
  return `${whole}~${hash.slice(0, hashLength)}`;
}
