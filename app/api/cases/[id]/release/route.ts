import { releaseCase } from "@/lib/cases/release";
import { route } from "@/lib/http";

export const POST = route("POST /api/cases/{id}/release", releaseCase);
