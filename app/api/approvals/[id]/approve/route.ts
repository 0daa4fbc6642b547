import { approveProposal } from "@/lib/approvals/approve";
import { route } from "@/lib/http";

export const POST = route("POST /api/approvals/{id}/approve", approveProposal);
