import type { EndpointTable } from "../endpoint";
import {
  AddPersonInput,
  OneTimePasswordView,
  PeopleInput,
  PeopleView,
  PersonInput,
  PersonView,
  SetRolesInput,
} from "./schema";

export const peopleEndpoints = {
  "GET /api/people": {
    summary: "Everybody with an account, and their roles",
    may: "people.read",
    input: PeopleInput,
    output: PeopleView,
  },
  "POST /api/people": {
    summary: "Adds a person with a one-time password",
    may: "people.manage",
    input: AddPersonInput,
    output: OneTimePasswordView,
    status: 201,
  },
  "POST /api/people/{id}/roles": {
    summary: "Replaces a person's roles; their sessions end",
    may: "people.manage",
    input: SetRolesInput,
    output: PersonView,
  },
  "POST /api/people/{id}/deactivate": {
    summary: "Closes an account; its sessions end and keys that act for it stop working",
    may: "people.manage",
    input: PersonInput,
    output: PersonView,
  },
  "POST /api/people/{id}/reactivate": {
    summary: "Opens a closed account again",
    may: "people.manage",
    input: PersonInput,
    output: PersonView,
  },
  "POST /api/people/{id}/password-reset": {
    summary: "Replaces the password by a one-time password, unlocks the account and ends its sessions",
    may: "people.manage",
    input: PersonInput,
    output: OneTimePasswordView,
  },
} as const satisfies EndpointTable;
