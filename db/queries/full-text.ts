/**
 * A full-text query from what a person typed: each word must occur, as the beginning of a word. Every word is quoted,
 * so that nothing typed is read as an operator. null: nothing that could be searched for.
 * Source of the quoting rule: the FTS5 page of SQLite's documentation, "FTS5 Strings".
 */
export function fullTextQuery(typed: string): string | null {
  const words = typed
    .replaceAll('\0', ' ')
    .split(/\s+/u)
    .filter((word) => /[\p{L}\p{N}]/u.test(word))
    .slice(0, maxWords);
  if (words.length === 0) return null;
  return words.map((word) => `"${word.replaceAll('"', '""')}"*`).join(' ');
}

const maxWords = 20;
