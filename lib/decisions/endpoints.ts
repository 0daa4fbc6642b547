import type { EndpointTable } from "../endpoint.ts";

export const decisionEndpoints = {} as const satisfies EndpointTable;
