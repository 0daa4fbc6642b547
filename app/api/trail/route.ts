import { route } from "@/lib/http";
import { searchTrail } from "@/lib/trail/search";

export const GET = route("GET /api/trail", searchTrail);
