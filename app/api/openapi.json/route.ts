import { route } from "@/lib/http";
import { readOpenApi } from "@/lib/read-openapi";

export const GET = route("GET /api/openapi.json", readOpenApi);
