import type { DecodeConfig } from '../../../src/config/types.js';
import { decoderOf } from '../../../src/decode/decoder.js';
import type { DecodeReason, FieldValue } from '../../../src/decode/types.js';

/** Decodes one text; paths are written with dots. */
export function decodeText(
  config: DecodeConfig,
  text: string,
  paths: readonly string[],
): DecodeReason | FieldValue[] {
  const decoder = decoderOf(
    config,
    paths.map((path) => path.split('.')),
  );
  // Bytes around the record show that nothing outside it is read.
  const bytes = Buffer.from(`{"x":1}${text}"}],`);
  const reason = decoder.decode(bytes, 7, bytes.length - 4);
  return reason ?? decoder.fields.slice();
}
