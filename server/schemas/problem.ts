/** The problem document on the wire, and the response entries of an operation that can answer with some of them. */
import { z } from 'zod';
import { PROBLEMS, type ProblemCode } from '../problems.ts';

export const problem = z
  .object({
    type: z.string().describe('urn:holdfast:problem: and the code.'),
    title: z.string(),
    status: z.int(),
    detail: z.string().describe('What is wrong this time.'),
    issues: z
      .array(z.object({ path: z.string(), message: z.string() }))
      .optional()
      .describe('Where the input is wrong, as `lamps[0].lamp.load.points[2].voltage_V`, and what would be right.'),
    residual_pct: z.number().optional().describe('Of the best fit, where a record cannot be fitted.'),
    limit_pct: z.number().optional().describe('Residual above which a fit is refused.'),
    powerFactors: z.array(z.number()).optional().describe('Least and largest power factor of the circuits of a class.'),
    fault: z.string().optional().describe('What is wrong with a scope record.'),
    row: z.int().optional().describe('Row of the record, from 1, headers included.'),
    column: z.string().optional().describe('Column of the record: time, voltage or current.'),
    requestId: z.string().optional().describe('The request in the log; also sent as the X-Request-Id header.'),
  })
  .meta({ id: 'Problem', description: 'What went wrong, as RFC 9457 has it.' });

/** Response entries by status for `schema.response`. */
export function problemResponses(...codes: readonly ProblemCode[]) {
  const statuses = [...new Set(codes.map((code) => PROBLEMS[code].status))];
  return Object.fromEntries(
    statuses.map((status) => {
      const told = codes.filter((code) => PROBLEMS[code].status === status).map((code) => `\`${code}\`: ${PROBLEMS[code].when}.`);
      return [status, { description: told.join('\n\n'), content: { 'application/problem+json': { schema: problem } } }];
    }),
  );
}
