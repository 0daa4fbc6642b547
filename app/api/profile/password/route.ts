import { route } from "@/lib/http";
import { changePassword } from "@/lib/profile/change-password";

export const POST = route("POST /api/profile/password", changePassword);
