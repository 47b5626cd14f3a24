/** Headers that tell browsers to do nothing with an answer but show it. The reference page alone may run its own scripts. */
import helmet from '@fastify/helmet';
import type { App } from '../app.ts';

export async function addSecurityHeaders(app: App): Promise<void> {
  await app.register(helmet, {
    contentSecurityPolicy: { useDefaults: false, directives: { defaultSrc: ["'none'"], frameAncestors: ["'none'"] } },
    // Transport security belongs to whatever terminates TLS before the service.
    hsts: false,
    // For browsers of more than ten years ago; a ready answer is mostly headers.
    xDownloadOptions: false,
    xDnsPrefetchControl: false,
    xPermittedCrossDomainPolicies: false,
    xXssProtection: false,
  });
}

/** For /docs: its scripts, styles and images come from the service itself; the page sets styles inline. */
export const REFERENCE_PAGE_CSP = {
  'default-src': ["'none'"],
  'script-src': ["'self'"],
  'style-src': ["'self'", "'unsafe-inline'"],
  'img-src': ["'self'", 'data:'],
  'font-src': ["'self'", 'data:'],
  'connect-src': ["'self'"],
  'base-uri': ["'none'"],
  'form-action': ["'none'"],
  'frame-ancestors': ["'none'"],
};
