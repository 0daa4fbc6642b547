import { caseEndpoints } from "./cases/endpoints.ts";
import { decisionEndpoints } from "./decisions/endpoints.ts";
import type { EndpointTable } from "./endpoint.ts";
import { outcomeEndpoints } from "./outcomes/endpoints.ts";
import { platformEndpoints } from "./platform-endpoints.ts";
import { policyEndpoints } from "./policy/endpoints.ts";
import { transactionEndpoints } from "./transactions/endpoints.ts";

/** Every route of the HTTP API: validation, access and the OpenAPI document come from here. */
export const ENDPOINTS = {
  ...platformEndpoints,
  ...transactionEndpoints,
  ...caseEndpoints,
  ...decisionEndpoints,
  ...policyEndpoints,
  ...outcomeEndpoints,
} as const satisfies EndpointTable;

export type EndpointKey = keyof typeof ENDPOINTS;
