import type { TimeFormat, TimeTools } from '../terms/time.js';
import { leaf } from './leaves.js';
import type { Leaf } from './leaves.js';

const SECOND_MS = 1_000;
const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;

/** A window length before the first day of the week is known. */
export type WindowText = number | 'day' | 'week' | 'month';

/** `5m` and the like in ms, or one of the calendar lengths. */
export function windowLength(time: TimeTools): Leaf<WindowText> {
  const calendar: ReadonlyMap<string, WindowText> = new Map([
    ['1d', 'day'],
    ['1w', 'week'],
    ['1mo', 'month'],
  ]);
  return leaf({ type: 'string', pattern: '^([0-9]+(s|m|h)|1d|1w|1mo)$' }, (text) => {
    const named = calendar.get(text);
    if (named !== undefined) return { value: named };
    const ms = time.parseDuration(text);
    const choices = 'write a divisor of 1h or 1d from 10s to 12h, such as 5m, or 1d, 1w, 1mo';
    if (ms === null) return { refused: `is not a window length; ${choices}` };
    const fits = ms >= 10 * SECOND_MS && ms <= 12 * HOUR_MS && ms % SECOND_MS === 0;
    if (fits && DAY_MS % ms === 0) return { value: ms };
    return { refused: `does not divide an hour or a day, or is out of range; ${choices}` };
  });
}

const EPOCHS: ReadonlyMap<string, TimeFormat> = new Map([
  ['iso', { kind: 'iso' }],
  ['epoch_s', { kind: 'epoch', unit: 's' }],
  ['epoch_ms', { kind: 'epoch', unit: 'ms' }],
  ['epoch_us', { kind: 'epoch', unit: 'us' }],
  ['epoch_ns', { kind: 'epoch', unit: 'ns' }],
]);

export function timeFormat(time: TimeTools): Leaf<TimeFormat> {
  return leaf({ type: 'string', minLength: 1 }, (text) => {
    const named = EPOCHS.get(text);
    if (named !== undefined) return { value: named };
    const names = [...EPOCHS.keys()].join(', ');
    if (text === 'syslog') return { refused: `is not available yet; write ${names} or a pattern` };
    const problem = time.ldmlProblem(text);
    if (problem === null) return { value: { kind: 'ldml', pattern: text } };
    return { refused: `is none of ${names}, and as an LDML pattern it ${problem}` };
  });
}

export function storePath(): Leaf<string> {
  return leaf({ type: 'string', minLength: 1 }, (text) => {
    if (/^postgres(ql)?:/.test(text)) {
      return { refused: 'is a PostgreSQL store, which is not available yet; write a file path' };
    }
    if (text.trim() !== '' && !text.includes('\0')) return { value: text };
    return { refused: 'is not a file path; write one such as var/tallyward.db' };
  });
}

/** `127.0.0.1:7417`, `localhost:7417` or `[::1]:7417`. */
export function listenAddress(): Leaf<{ readonly host: string; readonly port: number }> {
  return leaf({ type: 'string', pattern: '^.+:[0-9]{1,5}$' }, (text) => {
    const parts = /^(?:\[([0-9A-Fa-f:.]+)\]|([^\s:]+)):(\d{1,5})$/.exec(text);
    const port = Number(parts?.[3]);
    if (parts === null || port > 65_535) {
      return { refused: 'is not an address and port; write e.g. 127.0.0.1:7417' };
    }
    const host = parts[1] ?? parts[2] ?? '';
    if (isLoopback(host)) return { value: { host, port } };
    return {
      refused:
        'is off loopback, which needs tokens, which are not available yet; ' +
        'write 127.0.0.1 and a port',
    };
  });
}

function isLoopback(host: string): boolean {
  if (host === '::1' || host === 'localhost') return true;
  const parts = /^127\.(\d{1,3})\.(\d{1,3})\.(\d{1,3})$/.exec(host);
  return parts !== null && parts.slice(1).every((part) => Number(part) <= 255);
}

export function webhookUrl(): Leaf<string> {
  return leaf({ type: 'string', pattern: '^https?://' }, (text) =>
    /^https?:\/\//.test(text) && URL.canParse(text)
      ? { value: text }
      : { refused: 'is not an address; write one that begins with https:// or http://' },
  );
}
