import { caseView } from "@/lib/cases/read";
import { route } from "@/lib/http";

export const GET = route("GET /api/cases/{id}", caseView);
