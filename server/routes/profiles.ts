/** Fitting a profile to a lamp, without judging. */
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import type { AppDependencies } from '../app.ts';
import { profileQuestion, profileToWire, withQuery } from '../profiles/profile-question.ts';
import { problemResponses } from '../schemas/problem.ts';
import { profile, profileQuery, profileRequest } from '../schemas/profile.ts';
import { replyToFailure } from './verdict-failures.ts';

/** bytes: 200,000 rows of a scope's CSV */
export const PROFILE_LIMIT = 8 * 1024 * 1024;

export function profileRoute({ simulation }: Pick<AppDependencies, 'simulation'>): FastifyPluginAsyncZod {
  return async (app) => {
    // A record by itself: what is known of it besides stands in the address.
    app.addContentTypeParser('text/csv', { parseAs: 'string' }, (_request, csv, done) => done(null, { kind: 'scope-record', csv }));

    app.post(
      '/v1/profiles',
      {
        bodyLimit: PROFILE_LIMIT,
        schema: {
          operationId: 'fitProfile',
          tags: ['verdicts'],
          summary: 'Fit a recorded current to a lamp',
          description:
            'Turns a phase table or a scope record into a lamp that a pairing can hold: an input capacitor and a curve, or a reservoir lamp. Probe offsets, a reversed probe and noise are taken out of a scope record and reported. A scope record can also be sent as it is, as text/csv, with the query for what its header does not say. Nothing is judged and nothing is stored.',
          consumes: ['application/json', 'text/csv'],
          querystring: profileQuery,
          body: profileRequest,
          response: {
            200: { description: 'The fitted lamp.', content: { 'application/json': { schema: profile } } },
            ...problemResponses(
              'invalid-request',
              'malformed-json',
              'body-too-large',
              'unsupported-media-type',
              'profile-not-fitted',
              'scope-record-unusable',
              'internal',
              'queue-full',
              'stopping',
            ),
          },
        },
      },
      async (request, reply) => {
        const fitted = await simulation.fitProfile(profileQuestion(withQuery(request.body, request.query)));
        return fitted.ok ? reply.send(profileToWire(fitted.value)) : replyToFailure(reply, fitted.failure);
      },
    );
  };
}
