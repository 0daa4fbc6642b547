import { route } from "@/lib/http";
import { showDrift } from "@/lib/learning/show-drift";

export const GET = route("GET /api/learning/drift", showDrift);
