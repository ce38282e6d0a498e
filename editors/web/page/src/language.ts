import { StreamLanguage, StringStream } from '@codemirror/language';
import words from './words.json';

const set = (list: string[]) => new Set(list);
const keywords = set(words.keywords);
const kinds = set(words.kinds);
const functions = set(words.functions);
const modifiers = set(words.modifiers);
const distributions = set(words.distributions.map((d) => d.toLowerCase()));

function token(stream: StringStream): string | null {
  if (stream.eatSpace()) return null;
  if (stream.peek() === '#') {
    stream.skipToEnd();
    return 'comment';
  }
  if (stream.match(/^"(?:[^"\\]|\\.)*"?/)) return 'string';
  if (stream.match(/^\d+(?:\.\d+)?(?:[eE][-+]?\d+)?%?/)) return 'number';
  const start = stream.sol() || /^\s*$/.test(stream.string.slice(0, stream.start));
  const match = stream.match(/^[\p{L}_][\p{L}\p{N}\p{M}_]*(?:-[\p{L}][\p{L}\p{N}]*)*/u) as RegExpMatchArray | null;
  if (match) {
    const word = match[0];
    if (distributions.has(word.toLowerCase()) && /^\s*\(/.test(stream.string.slice(stream.pos))) return 'typeName';
    if (start && keywords.has(word)) return 'keyword';
    if (functions.has(word) && /^\s*\(/.test(stream.string.slice(stream.pos))) return 'macroName';
    if (kinds.has(word)) return 'className';
    if (modifiers.has(word)) return 'modifier';
    if (word.includes('-')) stream.backUp(word.length - word.indexOf('-'));
    return 'variableName';
  }
  stream.next();
  return 'operator';
}

/** Highlighting for the editor on the page; the words come from the grammar. */
export const bayes = StreamLanguage.define({ name: 'bayes', token, languageData: { commentTokens: { line: '#' } } });
