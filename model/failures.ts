/** The closed union of failures that a caller must expect from the model. They are returned, never thrown. */

export type ModelFailure =
  /** the pairing cannot be simulated as given; `path` is the place in the Pairing (dotted, zero-based), `message` what would be right */
  { readonly kind: 'invalid-pairing'; readonly issues: readonly { readonly path: string; readonly message: string }[] };

export type Outcome<T> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly failure: ModelFailure };
