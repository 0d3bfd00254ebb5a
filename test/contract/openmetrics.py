"""Reads exposed metrics from standard input and says whether a reference parser accepts them.

Usage: openmetrics.py [openmetrics|text]. Prints `ok N families`, or the fault and exits 1.
The parser lets some faults pass (measured), so these are checked here too: the same sample twice,
an escape that the format does not know, a family named twice, and what must come last.
"""

import re
import sys

from prometheus_client.openmetrics import parser as openmetrics
from prometheus_client import parser as text_format

LABEL = re.compile(r'([A-Za-z_]\w*)="((?:[^"\\]|\\.)*)"')


def check_escapes(lines):
    """Label values know the escapes of backslash, quote and line feed only, in both formats."""
    for number, line in enumerate(lines, 1):
        if line.startswith('#'):
            continue
        for _, value in LABEL.findall(line):
            # Pairs are taken from the left, so that an escaped backslash hides what follows it.
            for escaped in re.findall(r'\\(.)', value):
                if escaped not in '\\"n':
                    raise ValueError(f'line {number}: bad escape of {escaped!r}')


def check_metadata(lines):
    seen = set()
    for number, line in enumerate(lines, 1):
        found = re.match(r'# (HELP|TYPE|UNIT) (\S+)', line)
        if found is None:
            continue
        if found.groups() in seen:
            raise ValueError(f'line {number}: {found.group(1)} of {found.group(2)} comes twice')
        seen.add(found.groups())


def check_samples(lines):
    """Reads the lines, not the parser's families: those have lost a sample that came twice."""
    seen = set()
    for number, line in enumerate(lines, 1):
        if line == '' or line.startswith('#'):
            continue
        key = (re.match(r'[^{ ]+', line).group(0), tuple(sorted(LABEL.findall(line))))
        if key in seen:
            raise ValueError(f'line {number}: duplicate sample {key!r}')
        seen.add(key)


def check_end(text, form):
    if form == 'openmetrics' and not text.endswith('\n# EOF\n'):
        raise ValueError('the last line is not # EOF')
    if form == 'text' and (not text.endswith('\n') or '# EOF' in text.split('\n')):
        raise ValueError('the last line has no line feed, or # EOF is not of this format')


def check(text, form):
    """Returns the number of families; raises ValueError with the fault."""
    parser = openmetrics if form == 'openmetrics' else text_format
    families = list(parser.text_string_to_metric_families(text))
    lines = text.split('\n')
    check_escapes(lines)
    check_metadata(lines)
    check_samples(lines)
    check_end(text, form)
    return len(families)


def main():
    form = sys.argv[1] if len(sys.argv) > 1 else 'openmetrics'
    if form not in ('openmetrics', 'text'):
        print(f'unknown format {form}; write openmetrics or text')
        return 2
    try:
        count = check(sys.stdin.buffer.read().decode('utf-8'), form)
    except (ValueError, KeyError, IndexError) as fault:
        print(f'{type(fault).__name__}: {fault}')
        return 1
    print(f'ok {count} families')
    return 0


sys.exit(main())
