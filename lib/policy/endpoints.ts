import type { EndpointTable } from "../endpoint.ts";

export const policyEndpoints = {} as const satisfies EndpointTable;
