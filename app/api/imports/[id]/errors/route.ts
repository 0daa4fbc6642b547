import { route } from "@/lib/http";
import { importErrorsCsv } from "@/lib/imports/errors-csv";

export const GET = route("GET /api/imports/{id}/errors", importErrorsCsv);
