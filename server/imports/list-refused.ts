/** Raised while a list is read, where it is refused as a whole: nothing of it is kept, and the answer is a problem document. */
import type { ProblemCode } from '../problems.ts';
import type { Issue } from '../schemas/wire-parsing.ts';

export class ListRefused extends Error {
  readonly code: ProblemCode;
  readonly issues: readonly Issue[] | undefined;
  constructor(code: ProblemCode, detail: string, issues?: readonly Issue[]) {
    super(detail);
    this.code = code;
    this.issues = issues;
  }
}
