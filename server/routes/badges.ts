/** Badges of pairs of the catalogue, for other people's pages: as a picture and as JSON. */
import type { FastifyReply, FastifyRequest } from 'fastify';
import type { FastifyPluginAsyncZod } from 'fastify-type-provider-zod';
import { z } from 'zod';
import { type BadgeDependencies, type BadgeForm, pairBadges } from '../badges/pair-badges.ts';
import { sendProblem } from '../problem-replies.ts';
import type { ReadyAnswers } from '../ready-answers.ts';
import { badgeAnswer, badgeParams, badgeQuery } from '../schemas/badge-calls.ts';
import { noBody } from '../schemas/no-body.ts';
import { problemResponses } from '../schemas/problem.ts';

const TYPES = { svg: 'image/svg+xml; charset=utf-8', json: 'application/json; charset=utf-8' } as const;

/** s; a page that is looked at often asks again this seldom, and then with If-None-Match */
const FRESH_FOR = 300;

const HEADERS = {
  'cache-control': `public, max-age=${FRESH_FOR}`,
  // Any page may read and show a badge: it says nothing about who asks.
  'access-control-allow-origin': '*',
  'cross-origin-resource-policy': 'cross-origin',
  // The picture's own style, and nothing else.
  'content-security-policy': "default-src 'none'; style-src 'unsafe-inline'",
};

type BadgeRequest = FastifyRequest & {
  readonly params: z.output<typeof badgeParams>;
  readonly query: z.output<typeof badgeQuery>;
};

export function badgeRoutes(dependencies: BadgeDependencies, ready: ReadyAnswers): FastifyPluginAsyncZod {
  const badges = pairBadges(dependencies);

  const answer = (form: BadgeForm, request: BadgeRequest, reply: FastifyReply): void => {
    const { params, query } = request;
    const { count, mainsVoltage_V, mainsFrequency_Hz } = query;
    const mains =
      mainsVoltage_V === undefined || mainsFrequency_Hz === undefined
        ? undefined
        : { voltage_V: mainsVoltage_V, frequency_Hz: mainsFrequency_Hz };
    reply.headers(HEADERS);
    const badge = badges(form, params.dimmerId, params.lampId, { count, mains });
    if (!badge.ok) {
      // What is put a moment later must not be hidden by a page that asked too early.
      reply.header('cache-control', 'no-cache');
      sendProblem(reply, 'entry-not-found', `The catalogue has no such ${badge.missing}.`);
      return;
    }
    ready.send(request, reply, { type: TYPES[form], text: badge.text, holds: badge.holds });
  };

  return async (app) => {
    const documented = (operationId: string, summary: string) => ({
      operationId,
      tags: ['catalogue'],
      summary,
      description:
        'Says what the stored verdicts of the pair by itself say, of what the catalogue says now; "not screened" where both entries exist and there is none. Judges nothing. Any page may show it.',
      params: badgeParams,
      querystring: badgeQuery,
    });
    const otherwise = {
      304: noBody('It is what `If-None-Match` names.'),
      ...problemResponses('invalid-request', 'entry-not-found', 'internal', 'stopping'),
    };

    app.get(
      '/v1/badges/:dimmerId/:lampId.svg',
      {
        logLevel: 'warn',
        schema: {
          ...documented('showBadge', 'A badge for a catalogue page, as a picture'),
          response: {
            200: { description: 'A picture of a fixed size.', content: { 'image/svg+xml': { schema: z.string() } } },
            ...otherwise,
          },
        },
      },
      (request, reply) => answer('svg', request as BadgeRequest, reply as FastifyReply),
    );

    app.get(
      '/v1/badges/:dimmerId/:lampId.json',
      {
        logLevel: 'warn',
        schema: {
          ...documented('readBadge', 'A badge for a catalogue page, as JSON'),
          response: { 200: { description: 'What it says.', content: { 'application/json': { schema: badgeAnswer } } }, ...otherwise },
        },
      },
      (request, reply) => answer('json', request as BadgeRequest, reply as FastifyReply),
    );
  };
}
