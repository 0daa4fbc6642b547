import { takeNextCase } from "@/lib/cases/next";
import { route } from "@/lib/http";

export const POST = route("POST /api/queue/next", takeNextCase);
