import { z } from "zod";
import type { EndpointTable } from "../endpoint";
import {
  AssignManyInput,
  ChangedCasesView,
  FloorCasesInput,
  FloorCasesView,
  FloorView,
  ReleaseManyInput,
} from "./schema";

export const floorEndpoints = {
  "GET /api/floor": {
    summary: "What waits and where, and who holds what",
    may: "floor.read",
    input: z.strictObject({}),
    output: FloorView,
  },
  "GET /api/floor/cases": {
    summary: "Undecided cases by filter, sorted and in pages",
    may: "floor.read",
    input: FloorCasesInput,
    output: FloorCasesView,
  },
  "POST /api/floor/assign": {
    summary: "Assigns up to 500 cases to a person or to nobody, all or none",
    may: "case.assign",
    input: AssignManyInput,
    output: ChangedCasesView,
  },
  "POST /api/floor/release": {
    summary: "Takes claims back, of cases or of a person, all or none",
    may: "case.assign",
    input: ReleaseManyInput,
    output: ChangedCasesView,
  },
} as const satisfies EndpointTable;
