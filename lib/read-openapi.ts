import "server-only";
import { ENDPOINTS } from "./endpoints";
import { environment } from "./env";
import { openApiDocument } from "./openapi";

let body: string | undefined;

/** The document of the whole API, made once a process: the table does not change while it runs. */
export async function readOpenApi(): Promise<Response> {
  body ??= JSON.stringify(openApiDocument(ENDPOINTS, environment().APP_URL));
  return new Response(body, { headers: { "Content-Type": "application/json" } });
}
