import type { EndpointTable } from "../endpoint";
import { AddKeyInput, AddKeyView, KeyInput, KeysInput, KeysView, KeyView } from "./schema";

export const keyEndpoints = {
  "GET /api/keys": {
    summary: "API keys, without the keys themselves",
    may: "people.read",
    input: KeysInput,
    output: KeysView,
  },
  "POST /api/keys": {
    summary: "Makes an API key and shows it once",
    may: "keys.manage",
    input: AddKeyInput,
    output: AddKeyView,
    status: 201,
  },
  "POST /api/keys/{id}/revoke": {
    summary: "Ends an API key at once",
    may: "keys.manage",
    input: KeyInput,
    output: KeyView,
  },
} as const satisfies EndpointTable;
