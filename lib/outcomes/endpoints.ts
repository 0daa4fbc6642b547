import type { EndpointTable } from "../endpoint";

export const outcomeEndpoints = {} as const satisfies EndpointTable;
