import { describe, expect, it } from 'vitest';

import { prefersOpenMetrics } from '../../../src/serve/negotiate.js';

describe('choosing the format from Accept', () => {
  it.each([
    ['application/openmetrics-text'],
    ['application/openmetrics-text; version=1.0.0; charset=utf-8'],
    ['APPLICATION/OpenMetrics-Text'],
    [
      'application/openmetrics-text;version=1.0.0;q=0.5,' +
        'application/openmetrics-text;version=0.0.1;q=0.4,text/plain;version=0.0.4;q=0.3,*/*;q=0.2',
    ],
    ['text/plain;q=0.5, application/openmetrics-text'],
    ['text/plain, application/openmetrics-text'],
    ['application/openmetrics-text; q = 0.8, */*;q=0.1'],
    ['application/openmetrics-text;q=nonsense'],
    ['application/openmetrics-text;q=7'],
  ])('takes OpenMetrics when it is named and not below plain text: %s', (accept) => {
    expect(prefersOpenMetrics(accept)).toBe(true);
  });

  it.each([
    [undefined],
    [''],
    ['*/*'],
    ['text/plain'],
    ['application/*'],
    ['application/openmetrics-text;q=0'],
    ['application/openmetrics-text;q=0.2, text/plain;q=0.9'],
    ['application/openmetrics-text;q=0.2, */*'],
    ['application/openmetrics-textual'],
    [';;;,,,q=1'],
  ])('takes plain text when OpenMetrics is not named or is below it: %s', (accept) => {
    expect(prefersOpenMetrics(accept)).toBe(false);
  });
});
