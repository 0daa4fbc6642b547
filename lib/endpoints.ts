import { approvalEndpoints } from "./approvals/endpoints";
import { auditEndpoints } from "./audit/endpoints";
import { caseEndpoints } from "./cases/endpoints";
import { decisionEndpoints } from "./decisions/endpoints";
import type { EndpointTable } from "./endpoint";
import { floorEndpoints } from "./floor/endpoints";
import { importEndpoints } from "./imports/endpoints";
import { keyEndpoints } from "./keys/endpoints";
import { learningEndpoints } from "./learning/endpoints";
import { lossEndpoints } from "./losses/endpoints";
import { outcomeEndpoints } from "./outcomes/endpoints";
import { peopleEndpoints } from "./people/endpoints";
import { platformEndpoints } from "./platform-endpoints";
import { policyEndpoints } from "./policy/endpoints";
import { profileEndpoints } from "./profile/endpoints";
import { signalEndpoints } from "./signals/endpoints";
import { trailEndpoints } from "./trail/endpoints";
import { transactionEndpoints } from "./transactions/endpoints";

/** Every route of the HTTP API: validation, access and the OpenAPI document come from here. */
export const ENDPOINTS = {
  ...platformEndpoints,
  ...profileEndpoints,
  ...peopleEndpoints,
  ...keyEndpoints,
  ...trailEndpoints,
  ...auditEndpoints,
  ...transactionEndpoints,
  ...importEndpoints,
  ...caseEndpoints,
  ...decisionEndpoints,
  ...floorEndpoints,
  ...policyEndpoints,
  ...outcomeEndpoints,
  ...learningEndpoints,
  ...approvalEndpoints,
  ...signalEndpoints,
  ...lossEndpoints,
} as const satisfies EndpointTable;

export type EndpointKey = keyof typeof ENDPOINTS;
