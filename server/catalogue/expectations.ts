/**
 * What a writer expects of the entry it is about to change, so that nobody's edit is lost (RFC 9110, 13.1): the headers If-Match and
 * If-None-Match as a value. A revision's entity tag is its number in quotes.
 */

export type Expectation =
  /** nothing is expected and anything replaced: for imports, whose owner holds the whole list */
  | { readonly kind: 'whatever' }
  /** no header was sent: enough to create an entry, not to change one */
  | { readonly kind: 'unstated' }
  /** If-Match: * */
  | { readonly kind: 'present' }
  /** If-None-Match: * */
  | { readonly kind: 'absent' }
  /** If-Match with entity tags */
  | { readonly kind: 'revision'; readonly revisions: readonly number[] };

export type Unmet =
  | { readonly kind: 'expectation-not-stated' }
  | { readonly kind: 'expectation-not-met'; readonly revision: number | undefined };

export function revisionTag(revision: number): string {
  return `"${revision}"`;
}

/** Tags that no revision has are kept out: a header with nothing else then matches nothing. */
export function readExpectation(ifMatch: string | undefined, ifNoneMatch: string | undefined): Expectation {
  if (ifMatch !== undefined) return ifMatch.trim() === '*' ? { kind: 'present' } : { kind: 'revision', revisions: revisionsIn(ifMatch) };
  return ifNoneMatch?.trim() === '*' ? { kind: 'absent' } : { kind: 'unstated' };
}

/** Weak tags (W/"3") match nothing here, as the RFC wants it for If-Match. */
function revisionsIn(header: string): readonly number[] {
  return header.split(',').flatMap((tag) => {
    const [, digits] = /^"([1-9]\d{0,14})"$/.exec(tag.trim()) ?? [];
    return digits === undefined ? [] : [Number(digits)];
  });
}

/** What is wrong with changing an entry whose latest revision is `revision` (undefined: there is none); undefined where nothing is. */
export function unmetBy(expectation: Expectation, revision: number | undefined): Unmet | undefined {
  switch (expectation.kind) {
    case 'whatever':
      return undefined;
    case 'unstated':
      return revision === undefined ? undefined : { kind: 'expectation-not-stated' };
    case 'present':
      return revision === undefined ? { kind: 'expectation-not-met', revision } : undefined;
    case 'absent':
      return revision === undefined ? undefined : { kind: 'expectation-not-met', revision };
    case 'revision':
      return revision !== undefined && expectation.revisions.includes(revision) ? undefined : { kind: 'expectation-not-met', revision };
  }
}
