/** A list that is sent piece by piece over a real connection, so that a test can look at what happens before it is whole. */
import { once } from 'node:events';
import { Agent, type IncomingMessage, request } from 'node:http';
import { text } from 'node:stream/consumers';
import { onTestFinished } from 'vitest';

export interface OpenUpload {
  /** Settles when the piece is on its way. */
  send(piece: string): Promise<void>;
  end(): void;
  /** Settles when all that was sent has been taken from this end; rejects where the connection breaks first. */
  readonly taken: Promise<void>;
  /** Breaks the connection, as a client does that is killed. */
  goAway(): void;
  /** the head of the answer; its body is there to be read */
  readonly answer: Promise<IncomingMessage>;
  /** the whole answer */
  readonly answered: () => Promise<{ readonly status: number | undefined; readonly body: string }>;
}

export function openUpload(port: number, path: string, type = 'text/csv'): OpenUpload {
  const agent = new Agent({ keepAlive: true });
  const sending = request({ agent, host: '127.0.0.1', port, path, method: 'POST', headers: { 'content-type': type } });
  const answer = once(sending, 'response').then(([message]) => message as IncomingMessage);
  // A test that breaks the connection does not wait for an answer.
  answer.catch(() => undefined);
  sending.on('error', () => undefined);
  const taken = new Promise<void>((resolve, reject) => {
    sending.once('finish', resolve);
    sending.once('close', () => reject(new Error('The connection broke before all was taken.')));
  });
  taken.catch(() => undefined);
  onTestFinished(() => {
    sending.destroy();
    agent.destroy();
  });
  return {
    send: (piece) => new Promise((resolve, reject) => sending.write(piece, (error) => (error ? reject(error) : resolve()))),
    end: () => void sending.end(),
    taken,
    goAway: () => void sending.destroy(),
    answer,
    answered: async () => {
      const message = await answer;
      return { status: message.statusCode, body: await text(message) };
    },
  };
}
