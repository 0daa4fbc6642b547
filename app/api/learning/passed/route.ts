import { route } from "@/lib/http";
import { showPassed } from "@/lib/learning/show-passed";

export const GET = route("GET /api/learning/passed", showPassed);
