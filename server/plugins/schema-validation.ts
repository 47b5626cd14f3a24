/** Validates requests and writes responses by their zod schemas. */
import { serializerCompiler } from 'fastify-type-provider-zod';
import type { z } from 'zod';
import type { App } from '../app.ts';
import { RequestInvalid } from '../problem-replies.ts';
import { parseWire } from '../schemas/wire-parsing.ts';

export function validateBySchema(app: App): void {
  app.setValidatorCompiler<z.ZodType>(({ schema }) => (data) => {
    const parsed = parseWire(schema, data);
    return parsed.ok ? { value: parsed.value } : { error: new RequestInvalid(parsed.issues) };
  });
  // A response schema is an allow-list: fields it does not name stay inside.
  app.setSerializerCompiler(serializerCompiler);
}
