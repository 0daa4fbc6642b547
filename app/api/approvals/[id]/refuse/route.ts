import { refuseProposal } from "@/lib/approvals/refuse";
import { route } from "@/lib/http";

export const POST = route("POST /api/approvals/{id}/refuse", refuseProposal);
