import type { EndpointTable } from "../endpoint";
import { ChangePasswordInput, ProfileInput, ProfileView, SetTimeZoneInput } from "./schema";

export const profileEndpoints = {
  "GET /api/profile": {
    summary: "Who is signed in",
    may: "account.own",
    input: ProfileInput,
    output: ProfileView,
  },
  "POST /api/profile/password": {
    summary: "Changes one's own password; every session ends, this one too",
    may: "account.own",
    input: ChangePasswordInput,
    output: null,
    status: 204,
  },
  "PUT /api/profile/time-zone": {
    summary: "Sets the time zone that times are shown in",
    may: "account.own",
    input: SetTimeZoneInput,
    output: ProfileView,
  },
} as const satisfies EndpointTable;
