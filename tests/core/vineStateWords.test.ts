import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { vineStateOf } from '../../shared/catalog/vineStateWords.ts';

describe('words for the state of a vine', () => {
  it.each(['en', 'es', 'fr', 'it', 'pt'])('a pasted table may use those that the screen shows: %s', (language) => {
    const file = resolve(import.meta.dirname, '../../src/locales', language, 'blocks.json');
    const shown = (JSON.parse(readFileSync(file, 'utf8')) as { census: { state: Record<string, string> } }).census.state;
    expect(Object.keys(shown)).toHaveLength(6);
    for (const [state, word] of Object.entries(shown)) expect(vineStateOf(word), word).toBe(state);
  });

  it('knows no state by a word of another kind', () => {
    expect(vineStateOf('maybe')).toBeNull();
  });
});
