import { releaseMany } from "@/lib/floor/release-many";
import { route } from "@/lib/http";

export const POST = route("POST /api/floor/release", releaseMany);
