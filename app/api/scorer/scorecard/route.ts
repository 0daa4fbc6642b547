import { route } from "@/lib/http";
import { exportScorecard } from "@/lib/learning/export-scorecard";

export const GET = route("GET /api/scorer/scorecard", exportScorecard);
