import type { EndpointTable } from "../endpoint";

export const policyEndpoints = {} as const satisfies EndpointTable;
