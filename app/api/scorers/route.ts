import { route } from "@/lib/http";
import { createCandidate } from "@/lib/learning/create-candidate";

export const POST = route("POST /api/scorers", createCandidate);
