import { route } from "@/lib/http";
import { previewRemoval } from "@/lib/learning/preview-removal";

export const GET = route("GET /api/learning/removals/preview", previewRemoval);
