import { z } from 'zod';
import type { TimeTools } from '../terms/time.js';
import { anyText, choice, decimal, declaredShare, duration, fieldPath, flag } from './leaves.js';
import { linearPattern, percentage, someText, wholeNumber, zoneName } from './leaves.js';
import { listenAddress, storePath, timeFormat, webhookUrl, windowLength } from './specialLeaves.js';

/** Keys that are known but not built yet, by section. */
export const laterKeys = z.registry<{ readonly later: readonly string[] }>();

/** Sources of events that are known but not built yet. */
export const LATER_SOURCES: readonly string[] = [
  ...['push', 'syslog', 'otlp', 'sql', 'exec', 'nats', 'amqp', 'mqtt', 'kafka'],
];

export const LATER_YARDSTICKS: readonly string[] = ['peers'];

const DAY_MS = 86_400_000;
const MAX_MS = 3_660 * DAY_MS;

/** A mapping with fixed keys. Other keys are told by `unknownKeys`, with the nearest name. */
function section<T extends z.ZodRawShape>(shape: T, later: readonly string[] = []): z.ZodObject<T> {
  return z.object(shape).register(laterKeys, { later });
}

/** A mapping from category to value, in the order written. */
function byCategory<T extends z.ZodType>(value: T): z.ZodMap<z.ZodString, T> {
  return z.map(z.string(), value);
}

/** Lets one text stand for a section with that one key. */
function orShort<T extends z.ZodType>(key: string, full: T): z.ZodPreprocess<T> {
  const fill = (input: unknown): unknown => (typeof input === 'string' ? { [key]: input } : input);
  return z.preprocess(fill, full);
}

/** Lets one text stand for a list of it. */
function orSingle<T extends z.ZodType>(list: T): z.ZodPreprocess<T> {
  return z.preprocess((input) => (typeof input === 'string' ? [input] : input), list);
}

function budgetSection() {
  const perWeek = decimal((value) => value > 0 && value <= 10_000, 'a number above 0, up to 10000');
  return section(
    { per_week: perWeek.prefault('1').describe('False alarms a week that you accept.') },
    ['discovery_rate'],
  );
}

function collectorSection(time: TimeTools) {
  const paths = z
    .array(someText())
    .min(1, 'is empty; write at least one path')
    .max(100, 'has over 100 entries; write fewer, with wildcards');
  const stamp = section({
    field: fieldPath()
      .describe('Field path of the time stamp.')
      .meta({ examples: ['ts'] }),
    format: timeFormat(time)
      .prefault('iso')
      .describe('iso, epoch_s, epoch_ms, epoch_us, epoch_ns, or a Unicode LDML pattern.'),
    zone: zoneName(time).prefault('UTC').describe('Zone of stamps that name none.'),
  });
  return section(
    {
      tail: orSingle(paths)
        .optional()
        .describe('Files to follow; wildcards allowed. Exactly one of tail and stdin.'),
      stdin: flag(['true']).optional().describe('Read standard input.'),
      decode: choice(['json', 'pattern'], ['logfmt', 'csv', 'access', 'syslog'])
        .describe('How a line becomes an event.')
        .meta({ examples: ['json'] }),
      pattern: linearPattern()
        .optional()
        .describe('RE2 pattern whose named groups become fields; with decode: pattern.'),
      time: orShort('field', stamp)
        .describe('Field path, or a section with field, format and zone.')
        .meta({ examples: ['ts'] }),
    },
    LATER_SOURCES,
  );
}

function whereSection() {
  const finite = () => decimal(Number.isFinite, 'a number').optional();
  return section({
    field: fieldPath()
      .describe('Field path that the condition looks at.')
      .meta({ examples: ['outcome'] }),
    is: orSingle(z.array(anyText()).min(1, 'is empty; write at least one value'))
      .optional()
      .describe('The value, or one of a list.'),
    at_least: finite().describe('Least numeric value.'),
    at_most: finite().describe('Greatest numeric value.'),
    matches: linearPattern().optional().describe('RE2 pattern found anywhere in the value.'),
    missing: flag(['true', 'false']).optional().describe('true: the field is absent.'),
  });
}

function yardstickSection(time: TimeTools) {
  const instant = () => someText().optional();
  const baseline = section({
    last: duration(time, 1_000, MAX_MS)
      .optional()
      .describe('Rolling: the windows of this long before.'),
    from: instant().describe('Pinned: first instant or date, ISO 8601, in the zone of the mix.'),
    to: instant().describe('Pinned: end, not included.'),
    file: someText().optional().describe('CSV file with category,count and perhaps window.'),
  });
  const season = section({
    cycle: choice(['1d', '1w'])
      .describe('Length of the cycle.')
      .meta({ examples: ['1w'] }),
    keep: wholeNumber(2, 52).prefault('4').describe('Cycles kept.'),
    except: z
      .array(isoDate(time))
      .max(1_000, 'has over 1000 dates; write fewer')
      .prefault([])
      .describe('Local dates left out.'),
  });
  return section(
    {
      baseline: baseline.optional(),
      previous: wholeNumber(1, 96).optional().describe('Windows before this one.'),
      season: season.optional(),
      declared: byCategory(declaredShare())
        .optional()
        .describe('Shares by category, in per cent, with the sum 100%.'),
    },
    LATER_YARDSTICKS,
  );
}

function isoDate(time: TimeTools) {
  return someText().refine(
    (text) => /^\d{4}-\d{2}-\d{2}$/.test(text) && time.parseInstant(text, 'UTC') !== null,
    'is not a date; write one such as 2026-12-25',
  );
}

function limitsSection(time: TimeTools) {
  return section({
    categories: wholeNumber(2, 1_000)
      .prefault('64')
      .describe('Categories judged; what is over is summed in (rest).'),
    strands: wholeNumber(1, 100_000).prefault('1000').describe('Strands of the mix.'),
    forget: duration(time, 1_000, MAX_MS)
      .prefault('7d')
      .describe('A strand without events for this long, and for 24 windows, is forgotten.'),
    min_events: wholeNumber(1, 1_000_000)
      .prefault('20')
      .describe('A window with fewer events is thin.'),
  });
}

function toleranceSection() {
  return section({
    moved: percentage().prefault('1%').describe('Share of events that may move.'),
    each: byCategory(percentage()).optional().describe('The same for single categories.'),
  });
}

function mixSection(time: TimeTools) {
  return section(
    {
      from: someText()
        .describe('Name of the collector.')
        .meta({ examples: ['gateway'] }),
      category: fieldPath()
        .describe('Field path of the category.')
        .meta({ examples: ['outcome'] }),
      window: windowLength(time)
        .describe('A divisor of 1h or 1d from 10s to 12h, or 1d, 1w, 1mo.')
        .meta({ examples: ['5m'] }),
      zone: zoneName(time).prefault('UTC').describe('Zone that windows are aligned in.'),
      week_starts: choice(['monday', 'sunday']).prefault('monday').describe('For windows of 1w.'),
      where: z
        .array(whereSection())
        .max(32, 'has over 32 conditions; write fewer')
        .prefault([])
        .describe('Only events for which all conditions hold.'),
      split: z
        .array(fieldPath())
        .max(3, 'has more than 3 fields; write up to 3')
        .prefault([])
        .describe('Up to 3 field paths that subdivide the mix.'),
      lateness: duration(time, 0, 60 * DAY_MS)
        .prefault('30s')
        .describe('Up to 60d.'),
      yardstick: yardstickSection(time)
        .prefault({ baseline: { last: '14d' } })
        .describe('What windows are held against; exactly one of its keys.'),
      tolerance: orShort('moved', toleranceSection())
        .prefault({})
        .describe('Percentage, or a section.'),
      ordered: z
        .array(anyText())
        .min(2, 'has fewer than 2 categories; write them low to high')
        .optional()
        .describe('Ordinal categories, low to high.'),
      limits: limitsSection(time).prefault({}),
      settle: duration(time, 1_000, MAX_MS)
        .optional()
        .describe('When a shift that lasts becomes usual; else the longer of 24h and 24 windows.'),
      absence: choice(['off'], ['alert']).optional().describe('off is all there is yet.'),
      creep: choice(['off'], ['on']).optional().describe('off is all there is yet.'),
      false_alarms: budgetSection().optional().describe('A budget of its own.'),
    },
    ['keep', 'once_per'],
  );
}

function senderSection(time: TimeTools) {
  return section(
    {
      webhook: webhookUrl()
        .describe('Address that CloudEvents are posted to.')
        .meta({ examples: ['https://example.org/hook'] }),
      secret: someText().optional().describe('Signs each post (HMAC-SHA-256).'),
      fresh: duration(time, 1_000, MAX_MS)
        .prefault('15m')
        .describe('What could have been judged longer ago than this goes into the digest.'),
      digest: duration(time, 1_000, MAX_MS).prefault('1h').describe('How long a digest gathers.'),
    },
    ['email', 'command', 'file', 'only', 'quiet', 'provisional', 'alive'],
  );
}

/** The sections of a configuration; every default is stated here and nowhere else. */
export function configSchema(time: TimeTools) {
  const settings = {
    store: storePath().prefault('var/tallyward.db').describe('SQLite file.'),
    listen: listenAddress().prefault('127.0.0.1:7417').describe('A loopback address and port.'),
    false_alarms: budgetSection().prefault({}),
  };
  const collector = collectorSection(time);
  const mix = mixSection(time);
  const sender = senderSection(time);
  const whole = section(
    {
      ...settings,
      collectors: z.record(z.string(), collector).describe('Where events come from, by name.'),
      mixes: z.record(z.string(), mix).describe('What is watched, by name.'),
      send: z.record(z.string(), sender).prefault({}).describe('Who is told, by name.'),
    },
    ['tokens'],
  );
  return { settings: section(settings), collector, mix, sender, whole };
}

export type ConfigSchema = ReturnType<typeof configSchema>;
export type CollectorSection = z.output<ConfigSchema['collector']>;
export type MixSection = z.output<ConfigSchema['mix']>;
export type YardstickSection = MixSection['yardstick'];
export type SenderSection = z.output<ConfigSchema['sender']>;
