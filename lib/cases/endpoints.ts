import type { EndpointTable } from "../endpoint.ts";

export const caseEndpoints = {} as const satisfies EndpointTable;
