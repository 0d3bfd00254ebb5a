import type { TimeTools } from '../terms/time.js';
import { formatDuration, parseDuration } from './duration.js';
import { parseLdml } from './ldml.js';
import { timeParser } from './time.js';
import { isZone } from './zone.js';

/** What reading a configuration must know about time; pass it to `readConfig`. */
export const timeTools: TimeTools = {
  parseDuration,
  formatDuration,
  parseInstant: (text, zone) => timeParser({ kind: 'iso' }, zone)(text),
  isZone,
  ldmlProblem: (pattern) => {
    const read = parseLdml(pattern);
    return 'problem' in read ? read.problem : null;
  },
};
