import { route } from "@/lib/http";
import { showImport } from "@/lib/imports/read";

export const GET = route("GET /api/imports/{id}", showImport);
