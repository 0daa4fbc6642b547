import type { EndpointTable } from "../endpoint.ts";

export const outcomeEndpoints = {} as const satisfies EndpointTable;
