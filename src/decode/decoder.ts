import type { DecodeConfig } from '../config/types.js';
import { jsonDecoder } from './json/decoder.js';
import { patternDecoder } from './pattern.js';
import type { Decoder, FieldPath } from './types.js';

/**
 * The decoder of a configuration for the fields that anyone asks of a record.
 *
 * @param config how records are written
 * @param wanted paths, in the order in which `fields` will hold their values
 * @throws when a pattern does not compile (the configuration is checked before)
 */
export function decoderOf(config: DecodeConfig, wanted: readonly FieldPath[]): Decoder {
  return config.kind === 'json' ? jsonDecoder(wanted) : patternDecoder(config.pattern, wanted);
}
