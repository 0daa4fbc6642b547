import type { EndpointTable } from "../endpoint";
import { TrailInput, TrailView, VerifyInput, VerifyView } from "./schema";

export const trailEndpoints = {
  "GET /api/trail": {
    summary: "Entries of the trail, newest first; the search is itself recorded",
    may: "trail.read",
    input: TrailInput,
    output: TrailView,
  },
  "GET /api/trail/verify": {
    summary: "Works out the hash chain again from the first entry; itself recorded",
    may: "trail.read",
    input: VerifyInput,
    output: VerifyView,
  },
} as const satisfies EndpointTable;
