import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { parseEnvironment, printable, VARIABLE_NAMES } from '../../server/environment.ts';

describe('the environment', () => {
  it('has a default for everything', () => {
    const parsed = parseEnvironment({ PATH: '/bin' });
    expect(parsed).toMatchObject({
      ok: true,
      environment: {
        host: '127.0.0.1',
        port: 8080,
        dataFolder: './data',
        queueLimit: 256,
        stopDeadline_s: 20,
        redisUrl: undefined,
        logLevel: 'info',
      },
    });
    expect(parsed.ok && parsed.environment.workers).toBeGreaterThanOrEqual(1);
    expect(parsed.ok && Object.isFrozen(parsed.environment)).toBe(true);
  });

  it('takes what is set, and an empty variable for one that is not', () => {
    const set = { HOLDFAST_HOST: '::1', HOLDFAST_PORT: '0', HOLDFAST_DATA: '/srv/holdfast', HOLDFAST_WORKERS: '3', HOLDFAST_LOG_LEVEL: '' };
    expect(parseEnvironment(set)).toMatchObject({
      ok: true,
      environment: { host: '::1', port: 0, dataFolder: '/srv/holdfast', workers: 3, logLevel: 'info' },
    });
  });

  it('lists everything that is wrong with it', () => {
    const parsed = parseEnvironment({
      HOLDFAST_PORT: '99999',
      HOLDFAST_WORKERS: 'many',
      HOLDFAST_LOG_LEVEL: 'loud',
      HOLDFAST_REDIS_URL: 'http://127.0.0.1',
      HOLDFAST_QUEUE_LIMIT: '-1',
      HOLDFAST_PROT: '8080',
    });
    expect(parsed.ok ? [] : [...parsed.problems].sort()).toEqual([
      'HOLDFAST_LOG_LEVEL must be one of trace, debug, info, warn, error, fatal, silent',
      'HOLDFAST_PORT must be a whole number from 0 to 65535',
      expect.stringMatching(/^HOLDFAST_PROT is not a variable of this service; those are HOLDFAST_HOST, /),
      'HOLDFAST_QUEUE_LIMIT must be a whole number from 1 to 100000',
      'HOLDFAST_REDIS_URL must be a URL like redis://127.0.0.1:6379',
      'HOLDFAST_WORKERS must be a whole number from 1 to 256',
    ]);
  });

  it('is printed without a password', () => {
    const parsed = parseEnvironment({ HOLDFAST_REDIS_URL: 'redis://:hush@127.0.0.1:6379' });
    expect(JSON.stringify(parsed.ok && printable(parsed.environment))).not.toContain('hush');
  });

  it('is documented, each variable with its default, in .env.example', () => {
    const lines = readFileSync(new URL('../../.env.example', import.meta.url), 'utf8').split('\n');
    const documented = lines.flatMap((line) => /^(?:# )?(HOLDFAST_\w+)=/.exec(line)?.[1] ?? []);
    expect(documented.sort()).toEqual([...VARIABLE_NAMES].sort());

    const stated = Object.fromEntries(
      lines.filter((line) => line.startsWith('HOLDFAST_')).map((line) => line.split('=') as [string, string]),
    );
    expect(parseEnvironment(stated)).toEqual(parseEnvironment({}));
  });
});
