import type { EndpointTable } from "../endpoint";
import {
  ApprovalsInput,
  ApprovalsView,
  ApprovalView,
  RefuseApprovalInput,
  SettleApprovalInput,
} from "./schema";

export const approvalEndpoints = {
  "GET /api/approvals": {
    summary: "What needs a second person: promotions of scorers, own signals, removals of labels",
    may: "approvals.read",
    input: ApprovalsInput,
    output: ApprovalsView,
  },
  "POST /api/approvals/{id}/approve": {
    summary: "Approves what somebody else proposed, and does it",
    may: "approvals.settle",
    input: SettleApprovalInput,
    output: ApprovalView,
  },
  "POST /api/approvals/{id}/refuse": {
    summary: "Refuses what somebody else proposed",
    may: "approvals.settle",
    input: RefuseApprovalInput,
    output: ApprovalView,
  },
  "POST /api/approvals/{id}/withdraw": {
    summary: "Withdraws one's own proposal",
    may: "scorer.manage",
    input: SettleApprovalInput,
    output: ApprovalView,
  },
} as const satisfies EndpointTable;
