import { route } from "@/lib/http";
import { listExemptFields, setExemptFields } from "@/lib/transactions/set-exempt-fields";

export const GET = route("GET /api/transactions/exempt-fields", listExemptFields);
export const PUT = route("PUT /api/transactions/exempt-fields", setExemptFields);
