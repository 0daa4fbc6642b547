import { route } from "@/lib/http";
import { proposeRemoval } from "@/lib/learning/propose-removal";

export const POST = route("POST /api/learning/removals", proposeRemoval);
