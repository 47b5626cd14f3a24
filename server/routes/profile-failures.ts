/** Which problem document it becomes that a lamp's record cannot be fitted, or that no circuit of its class is like it. */
import type { FastifyReply } from 'fastify';
import { sendProblem } from '../problem-replies.ts';
import type { CircuitFailure } from '../simulation/simulation.ts';
import { shown } from '../verdicts/shown-figures.ts';

type Refused = Extract<CircuitFailure, { kind: 'profile-refused' }>;

export function sendProfileProblem(reply: FastifyReply, refused: Refused): FastifyReply {
  const { failure } = refused;
  const { detail } = failure;
  const issues = issuesOf(refused);
  const extras = issues.length === 0 ? {} : { issues };
  switch (failure.kind) {
    case 'invalid-profile':
      return sendProblem(reply, 'invalid-request', detail, extras);
    case 'class-does-not-fit':
      return sendProblem(reply, 'class-does-not-fit', detail, { ...extras, members: { powerFactors: failure.range.map(shown) } });
    case 'residual-too-large': {
      const members = { residual_pct: shown(100 * failure.residual), limit_pct: shown(100 * failure.limit) };
      return sendProblem(reply, 'profile-not-fitted', detail, { ...extras, members });
    }
    case 'arc-not-resolved':
    case 'table-power':
      return sendProblem(reply, 'profile-not-fitted', detail, extras);
    default: {
      const row = 'row' in failure && failure.row !== null ? { row: failure.row } : {};
      const column = 'column' in failure && failure.column !== null ? { column: failure.column } : {};
      return sendProblem(reply, 'scope-record-unusable', detail, { ...extras, members: { fault: failure.kind, ...row, ...column } });
    }
  }
}

/** Where in the body it is wrong; a body that is one profile needs no place. */
function issuesOf({ failure, group }: Refused): readonly { readonly path: string; readonly message: string }[] {
  const place = group === null ? '' : `lamps[${group}].lamp.load`;
  if (failure.kind === 'invalid-profile') {
    return failure.issues.map(({ path, message }) => ({ path: [place, path].filter((part) => part !== '').join('.'), message }));
  }
  if (group === null) return [];
  return [{ path: failure.kind === 'class-does-not-fit' ? `lamps[${group}].lamp` : place, message: failure.detail }];
}
