import { Composer, LineCounter, Parser } from 'yaml';
import type { CST, Document } from 'yaml';
import type { Problems } from './problems.js';

/** Deepest nesting of lists and mappings, aliases followed. */
export const MAX_DEPTH = 16;

export const tooDeep = `the file is nested more than ${MAX_DEPTH} levels deep; write it flatter`;

export interface ParsedYaml {
  readonly document: Document;
  /** Turns an offset into line and column. */
  readonly lines: LineCounter;
}

/** Parses one YAML 1.2 document, all scalars as text; null when it is none, which is told. */
export function parseYaml(text: string, problems: Problems): ParsedYaml | null {
  const lines = new LineCounter();
  const tell = (offset: number, message: string): void => {
    const { line, col } = lines.linePos(offset);
    problems.add({ line, column: col }, message);
  };
  const tokens = [...new Parser(lines.addNewLine).parse(text)];
  // Composing calls itself once a level, so a hostile file must be stopped before it.
  const deep = tooDeepAt(tokens);
  if (deep !== null) {
    tell(deep, tooDeep);
    return null;
  }
  const [document, second] = composeAll(tokens, text.length);
  if (document === undefined) return null;
  for (const error of [...document.errors, ...document.warnings]) {
    tell(error.pos[0], `not valid YAML: ${oneLine(error.message)}; correct it here`);
  }
  if (second !== undefined) {
    tell(second.range[0], 'a second document begins; write one');
    return null;
  }
  return document.errors.length > 0 ? null : { document, lines };
}

function composeAll(tokens: readonly CST.Token[], length: number) {
  const composer = new Composer({
    schema: 'failsafe',
    // Repeated keys are told when the tree is made, each at its place.
    uniqueKeys: false,
    prettyErrors: false,
    logLevel: 'silent',
  });
  return [...composer.compose(tokens, true, length)];
}

/** Offset of the first collection found below MAX_DEPTH others; null when there is none. */
function tooDeepAt(tokens: readonly CST.Token[]): number | null {
  const open: { readonly token: CST.Token; readonly depth: number }[] = [];
  for (const token of tokens) open.push({ token, depth: 0 });
  for (let next = open.pop(); next !== undefined; next = open.pop()) {
    const { token, depth } = next;
    if (depth > MAX_DEPTH) return token.offset;
    if (token.type === 'document' && token.value !== undefined) {
      open.push({ token: token.value, depth });
    }
    for (const item of 'items' in token ? token.items : []) {
      if (item.key) open.push({ token: item.key, depth: depth + 1 });
      if (item.value !== undefined) open.push({ token: item.value, depth: depth + 1 });
    }
  }
  return null;
}

function oneLine(text: string): string {
  return text.replace(/\s+/g, ' ').replace(/;/g, ',').trim();
}
