/**
 * What other routes are measured against: Fastify with nothing but routes that answer constants of given sizes, `/0`, `/1` and so on,
 * in a process of its own. Prints its address. `node --import tsx scripts/bare-route.ts TYPE:BYTES …`
 */
import Fastify from 'fastify';

const app = Fastify();
for (const [index, argument] of process.argv.slice(2).entries()) {
  const [type = 'text/plain', bytes = '0'] = argument.split(':');
  const body = Buffer.alloc(Number(bytes), 'x');
  app.get(`/${index}`, (_request, reply) => void reply.type(type).send(body));
}
process.on('SIGTERM', () => void app.close());
console.log(await app.listen({ port: 0, host: '127.0.0.1' }));
