import { route } from "@/lib/http";
import { readLearning } from "@/lib/learning/compare";

export const GET = route("GET /api/learning", readLearning);
