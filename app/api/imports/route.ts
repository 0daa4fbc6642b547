import { route } from "@/lib/http";
import { listImports } from "@/lib/imports/read";
import { uploadImport } from "@/lib/imports/upload";

export const GET = route("GET /api/imports", listImports);
export const POST = route("POST /api/imports", uploadImport);
