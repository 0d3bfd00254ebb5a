import type { TimeFormat } from '../terms/time.js';
import { epochParser } from './epoch.js';
import { isoParser } from './iso.js';
import { ldmlParser } from './ldmlTime.js';
import { zoneOf } from './zone.js';

/**
 * The reader of time stamps in one format: text to epoch milliseconds UTC, null for text that is no
 * such stamp. `zone` (IANA) is used where a stamp names none; a local time that the clocks repeat
 * is taken as the earlier one. Throws RangeError for an unknown zone or an unusable pattern.
 */
export function timeParser(format: TimeFormat, zone: string): (text: string) => number | null {
  switch (format.kind) {
    case 'iso':
      return isoParser(zoneOf(zone));
    case 'epoch':
      return epochParser(format.unit);
    case 'ldml':
      return ldmlParser(format.pattern, zoneOf(zone));
  }
}
