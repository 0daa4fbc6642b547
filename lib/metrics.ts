import "server-only";
import { count } from "drizzle-orm";
import { collectDefaultMetrics, Gauge, Histogram, Registry } from "prom-client";
import { sharedDatabase } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { demand } from "./auth/demand";
import type { Context } from "./context";
import { environment } from "./env";

type Metrics = { registry: Registry; httpSeconds: Histogram<"route" | "status"> };

// Next gives each entry its own copy of a module; the figures are one set per process.
const shared = globalThis as typeof globalThis & { cupelMetrics?: Metrics };

function metrics(): Metrics {
  shared.cupelMetrics ??= createMetrics();
  return shared.cupelMetrics;
}

function createMetrics(): Metrics {
  const registry = new Registry();
  collectDefaultMetrics({ register: registry });
  const httpSeconds = new Histogram({
    name: "cupel_http_request_seconds",
    help: "Time taken by a call of the API, by route and status",
    labelNames: ["route", "status"],
    buckets: [0.005, 0.01, 0.02, 0.04, 0.1, 0.25, 0.5, 1, 2.5, 10],
    registers: [registry],
  });
  new Gauge({
    name: "cupel_cases",
    help: "Cases by state, of the whole installation",
    labelNames: ["state"],
    registers: [registry],
    async collect() {
      this.reset();
      for (const row of await countCases()) this.set({ state: row.state }, row.count);
    },
  });
  new Gauge({
    name: "cupel_decisions",
    help: "Decisions recorded so far by kind, of the whole installation",
    labelNames: ["kind"],
    registers: [registry],
    async collect() {
      this.reset();
      for (const row of await countDecisions()) this.set({ kind: row.kind }, row.count);
    },
  });
  return { registry, httpSeconds };
}

const database = () => sharedDatabase(environment().DATABASE_URL);

const countCases = () =>
  database().select({ state: cases.state, count: count() }).from(cases).groupBy(cases.state);

const countDecisions = () =>
  database().select({ kind: decisions.kind, count: count() }).from(decisions).groupBy(decisions.kind);

/** `route` is the pattern with its parameters unfilled: the label must stay of few values. */
export function observeCall(route: string, status: number, seconds: number): void {
  metrics().httpSeconds.observe({ route, status: String(status) }, seconds);
}

export async function readMetrics(ctx: Context): Promise<Response> {
  demand(ctx, "metrics.read");
  const { registry } = metrics();
  return new Response(await registry.metrics(), { headers: { "Content-Type": registry.contentType } });
}
