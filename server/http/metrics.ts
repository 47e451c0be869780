import { collectDefaultMetrics, Gauge, Histogram, Registry } from 'prom-client';

export interface Metrics {
  registry: Registry;
  /** Seconds that an endpoint took, by its name in the endpoint table and its status. */
  requestSeconds: Histogram<'endpoint' | 'status'>;
}

/** A registry of its own, so that two servers in one process do not share counts. */
export function createMetrics(gauges: { liveConnections: () => number }): Metrics {
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  new Gauge({
    name: 'steadfall_live_connections',
    help: 'Browsers on the live stream',
    registers: [registry],
    collect() {
      this.set(gauges.liveConnections());
    },
  });
  const requestSeconds = new Histogram({
    name: 'steadfall_http_request_seconds',
    help: 'Time to answer an endpoint',
    labelNames: ['endpoint', 'status'] as const,
    buckets: [0.005, 0.02, 0.1, 0.5, 2, 10],
    registers: [registry],
  });
  return { registry, requestSeconds };
}
