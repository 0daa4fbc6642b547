import { listApprovals } from "@/lib/approvals/read";
import { route } from "@/lib/http";

export const GET = route("GET /api/approvals", listApprovals);
