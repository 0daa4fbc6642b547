import { z } from "zod";
import type { EndpointTable } from "./endpoint";

const Nothing = z.strictObject({});

export const Readiness = z.strictObject({
  database: z.boolean(),
  migrations: z.boolean(),
  /** A policy and a scorer are in use. */
  installed: z.boolean(),
  mail: z.boolean(),
});
export type Readiness = z.infer<typeof Readiness>;

export const platformEndpoints = {
  "GET /api/health/live": {
    summary: "Says that the process answers",
    may: "anyone",
    input: Nothing,
    output: z.strictObject({ live: z.literal(true) }),
  },
  "GET /api/health/ready": {
    summary: "Says whether database, migrations and mail are there; 503 where one is not",
    may: "anyone",
    input: Nothing,
    output: Readiness,
    also: [503],
  },
  "GET /api/metrics": {
    summary: "Figures of this process and of the installation in the Prometheus text format",
    may: "metrics.read",
    input: Nothing,
    output: null,
    produces: "text/plain",
  },
  "GET /api/openapi.json": {
    summary: "This document",
    may: "anyone",
    input: Nothing,
    output: null,
    produces: "application/json",
  },
} as const satisfies EndpointTable;
