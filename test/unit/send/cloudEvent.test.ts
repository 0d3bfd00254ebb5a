import { describe, expect, it } from 'vitest';

import { cloudEvent } from '../../../src/send/cloudEvent.js';
import { sampleAlert, sampleMessage } from './samples.js';

const source = 'urn:example:tallyward';

describe('the CloudEvent of a message', () => {
  it('has the attributes that CloudEvents 1.0 asks for', () => {
    const event = cloudEvent(sampleMessage(), source);
    expect(event).toMatchObject({
      specversion: '1.0',
      id: 'message-1',
      source,
      type: 'tallyward.alert.raised',
      datacontenttype: 'application/json',
      data: { summary: 'gateway-outcomes in north shifted' },
    });
    expect(Date.parse(event.time)).toBe(Date.UTC(2026, 2, 1));
    // RFC 3339 section 5.6, in UTC.
    expect(event.time).toMatch(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(\.\d+)?Z$/);
  });

  it('names digests apart from alerts', () => {
    const types = (['moved', 'returned', 'settled', 'cleared', 'digest'] as const).map(
      (event) => cloudEvent(sampleMessage({ event }), source).type,
    );
    expect(types).toEqual([
      'tallyward.alert.moved',
      'tallyward.alert.returned',
      'tallyward.alert.settled',
      'tallyward.alert.cleared',
      'tallyward.digest',
    ]);
  });

  it('is the same to the byte whenever it is made from the same message', () => {
    const texts = [0, 1].map(() => JSON.stringify(cloudEvent(sampleMessage(), source)));
    expect(texts[0]).toBe(texts[1]);
  });

  it('carries every alert of the message', () => {
    const alerts = [sampleAlert({ id: 'a' }), sampleAlert({ id: 'b' })];
    const { data } = cloudEvent(sampleMessage({ alerts }), source);
    expect(data.alerts.map(({ id }) => id)).toEqual(['a', 'b']);
  });

  it('refuses an empty source', () => {
    expect(() => cloudEvent(sampleMessage(), '')).toThrow(
      new RangeError('source: is empty; give the URI of the instance'),
    );
  });
});
