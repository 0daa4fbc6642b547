import { route } from "@/lib/http";
import { receiveOutcomes } from "@/lib/outcomes/receive";

export const POST = route("POST /api/outcomes", receiveOutcomes);
