/** Keeps the tables by which entries are found, tags and words of names, in step with what was put and deleted. */
import type { EntryKind, EntryWrite } from './entries.ts';
import type { RecordDatabase } from './record.ts';

export interface Findability {
  remember(write: Pick<EntryWrite, 'kind' | 'id' | 'tags' | 'words'>): void;
  forget(kind: EntryKind, id: string): void;
}

export function findability(record: RecordDatabase): Findability {
  const addTag = record.prepare('INSERT INTO entry_tags (kind, tag, id) VALUES (?, ?, ?)');
  const addWord = record.prepare('INSERT INTO entry_words (kind, word, id) VALUES (?, ?, ?)');
  const dropTags = record.prepare('DELETE FROM entry_tags WHERE kind = ? AND id = ?');
  const dropWords = record.prepare('DELETE FROM entry_words WHERE kind = ? AND id = ?');
  return {
    remember: ({ kind, id, tags, words }) => {
      for (const tag of new Set(tags)) addTag.run(kind, tag, id);
      for (const word of new Set(words)) addWord.run(kind, word, id);
    },
    forget: (kind, id) => {
      dropTags.run(kind, id);
      dropWords.run(kind, id);
    },
  };
}
