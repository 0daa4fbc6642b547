import { route } from "@/lib/http";
import { addPerson } from "@/lib/people/add";
import { listPeople } from "@/lib/people/read";

export const GET = route("GET /api/people", listPeople);
export const POST = route("POST /api/people", addPerson);
