import type { EndpointTable } from "../endpoint.ts";

export const transactionEndpoints = {} as const satisfies EndpointTable;
