import { withdrawProposal } from "@/lib/approvals/withdraw";
import { route } from "@/lib/http";

export const POST = route("POST /api/approvals/{id}/withdraw", withdrawProposal);
