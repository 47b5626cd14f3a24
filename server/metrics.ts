/**
 * Counters and gauges in the Prometheus text format (version 0.0.4): the few this service needs, without a library. Label values are
 * route patterns, methods and codes, never what a client sent.
 */

export interface Counter {
  add(labels?: Labels, by?: number): void;
  /** Counts under these labels, which are written out once: for what is counted with every request. */
  under(labels: Labels): (by?: number) => void;
}

type Labels = { readonly [name: string]: string | number };

export interface Metrics {
  counter(name: string, help: string): Counter;
  /** `read` is called when the metrics are asked for */
  gauge(name: string, help: string, read: () => number): void;
  text(): string;
}

export const METRICS_TYPE = 'text/plain; version=0.0.4; charset=utf-8';

export function createMetrics(): Metrics {
  const families: (() => string)[] = [];
  return {
    counter: (name, help) => {
      const totals = new Map<string, number>();
      families.push(() => family(name, 'counter', help, [...totals]));
      const under = (labels: Labels) => {
        const key = labelText(labels);
        return (by = 1) => void totals.set(key, (totals.get(key) ?? 0) + by);
      };
      return { under, add: (labels = {}, by = 1) => under(labels)(by) };
    },
    gauge: (name, help, read) => {
      families.push(() => family(name, 'gauge', help, [['', read()]]));
    },
    text: () => families.map((render) => render()).join(''),
  };
}

function family(name: string, type: string, help: string, samples: readonly (readonly [string, number])[]): string {
  const lines = samples.map(([labels, value]) => `${name}${labels} ${value}\n`);
  return `# HELP ${name} ${help}\n# TYPE ${name} ${type}\n${lines.join('')}`;
}

function labelText(labels: Labels): string {
  const pairs = Object.entries(labels).map(([name, value]) => `${name}="${escaped(String(value))}"`);
  return pairs.length === 0 ? '' : `{${pairs.join(',')}}`;
}

function escaped(value: string): string {
  return value.replaceAll('\\', '\\\\').replaceAll('"', '\\"').replaceAll('\n', '\\n');
}
