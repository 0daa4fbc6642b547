import { z } from "zod";
import type { EndpointTable } from "../endpoint";
import { ApproveInput, DeclineInput, PolicyRecord, PolicyView, ProposeInput, WithdrawInput } from "./schema";

export const policyEndpoints = {
  "GET /api/policy": {
    summary: "The terms in force, proposals that wait, and earlier versions",
    may: "policy.read",
    input: z.strictObject({}),
    output: PolicyView,
  },
  "POST /api/policy/proposals": {
    summary: "Proposes new terms; a second person approves them",
    may: "policy.propose",
    input: ProposeInput,
    output: PolicyRecord,
    status: 201,
  },
  "POST /api/policy/proposals/{id}/approve": {
    summary: "Approves somebody else's proposal, at once or from a later moment",
    may: "policy.approve",
    input: ApproveInput,
    output: PolicyRecord,
  },
  "POST /api/policy/proposals/{id}/decline": {
    summary: "Declines somebody else's proposal, with a reason",
    may: "policy.approve",
    input: DeclineInput,
    output: PolicyRecord,
  },
  "POST /api/policy/proposals/{id}/withdraw": {
    summary: "Withdraws one's own proposal",
    may: "policy.propose",
    input: WithdrawInput,
    output: PolicyRecord,
  },
} as const satisfies EndpointTable;
