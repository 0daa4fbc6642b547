import type { EndpointTable } from "../endpoint";

export const transactionEndpoints = {} as const satisfies EndpointTable;
