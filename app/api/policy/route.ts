import { route } from "@/lib/http";
import { readPolicy } from "@/lib/policy/overview";

export const GET = route("GET /api/policy", readPolicy);
