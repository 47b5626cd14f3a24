/** The words of a name as searches compare them: lower case, without accents, split at everything but letters and digits. */
export function foldedWords(name: string): readonly string[] {
  const folded = name
    .normalize('NFKD')
    .replace(/\p{M}+/gu, '')
    .toLowerCase();
  return [...new Set(folded.match(/[\p{L}\p{N}]+/gu) ?? [])];
}
