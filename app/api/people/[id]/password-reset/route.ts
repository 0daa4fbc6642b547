import { route } from "@/lib/http";
import { resetPassword } from "@/lib/people/reset-password";

export const POST = route("POST /api/people/{id}/password-reset", resetPassword);
