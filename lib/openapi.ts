import { STATUS_CODES } from "node:http";
import { z } from "zod";
import packageJson from "../package.json";
import { CAPABILITIES, scopesFor } from "./auth/access";
import { type Endpoint, type EndpointTable, pathParameters } from "./endpoint";

type JsonSchema = Record<string, unknown>;
type Direction = "input" | "output";

/**
 * The OpenAPI 3.1 document of a table of endpoints: the schemas that check requests and answers are the ones that
 * describe them.
 */
export function openApiDocument(endpoints: EndpointTable, serverUrl: string): JsonSchema {
  const paths: Record<string, Record<string, unknown>> = {};
  for (const [key, endpoint] of Object.entries(endpoints)) {
    const [method = "", path = ""] = key.split(" ");
    paths[path] = { ...paths[path], [method.toLowerCase()]: operation(key, endpoint) };
  }
  return {
    openapi: "3.1.0",
    info: {
      title: "Cupel",
      version: packageJson.version,
      summary: "A scored review queue for payment-fraud teams",
      description:
        "Times are RFC 3339 in UTC. Amounts are decimal strings beside an ISO 4217 code. Errors are problems of RFC 9457. Lists answer `items` and an opaque `next`, null on the last page. Unknown fields are refused.",
    },
    servers: [{ url: serverUrl }],
    paths,
    components: {
      schemas: { Problem: PROBLEM },
      responses: {
        Problem: {
          description: "A problem of RFC 9457; `errors` names the fields that are wrong",
          content: { "application/problem+json": { schema: { $ref: "#/components/schemas/Problem" } } },
        },
      },
      securitySchemes: {
        key: { type: "http", scheme: "bearer", description: "An API key; the requirement lists its scope" },
        session: {
          type: "apiKey",
          in: "cookie",
          name: "cupel.session",
          description: "A browser's session; served over HTTPS the name begins with __Host-",
        },
      },
    },
  };
}

const PROBLEM: JsonSchema = {
  type: "object",
  required: ["title", "status", "detail", "instance", "code"],
  properties: {
    title: { type: "string" },
    status: { type: "integer" },
    detail: { type: "string" },
    instance: { type: "string", format: "uri" },
    code: { type: "string" },
    errors: {
      type: "array",
      items: {
        type: "object",
        required: ["path", "message"],
        properties: { path: { type: "string" }, message: { type: "string" } },
      },
    },
  },
};

function operation(key: string, endpoint: Endpoint): JsonSchema {
  const [method = ""] = key.split(" ");
  const inPath = pathParameters(key);
  const { properties, required } = schemaOf(endpoint.input, "input") as {
    properties: Record<string, JsonSchema>;
    required?: string[];
  };
  const names = Object.keys(properties ?? {}).filter((name) => !inPath.includes(name));
  const asQuery = method === "GET" || endpoint.body === "raw";
  const parameters = [
    ...inPath.map((name) => ({ name, in: "path", required: true, schema: properties[name] })),
    ...(asQuery ? names : []).map((name) => ({
      name,
      in: "query",
      required: required?.includes(name) ?? false,
      schema: properties[name],
    })),
    ...(method === "POST" && (!asQuery || endpoint.keyed) ? [IDEMPOTENCY_KEY] : []),
  ];
  return {
    operationId: operationId(key),
    summary: endpoint.summary,
    ...(parameters.length > 0 && { parameters }),
    ...(!asQuery && { requestBody: jsonBody(properties, required ?? [], names) }),
    ...(endpoint.body === "raw" && { requestBody: RAW_BODY }),
    responses: { ...success(endpoint), default: { $ref: "#/components/responses/Problem" } },
    security: security(endpoint),
  };
}

const RAW_BODY = {
  required: true,
  content: { "multipart/form-data": { schema: { type: "object" } } },
};

const IDEMPOTENCY_KEY = {
  name: "Idempotency-Key",
  in: "header",
  required: false,
  description:
    "The same key and body get the same answer for 24 hours; the same key with another body gets 422",
  schema: { type: "string", minLength: 1, maxLength: 128 },
};

function jsonBody(properties: Record<string, JsonSchema>, required: string[], names: string[]): JsonSchema {
  const needed = required.filter((name) => names.includes(name));
  const schema = {
    type: "object",
    properties: Object.fromEntries(names.map((name) => [name, properties[name]])),
    ...(needed.length > 0 && { required: needed }),
    additionalProperties: false,
  };
  return { required: needed.length > 0, content: { "application/json": { schema } } };
}

function success({ output, status, also = [], produces }: Endpoint): JsonSchema {
  const usual = status ?? (output || produces ? 200 : 204);
  const content = output
    ? { "application/json": { schema: schemaOf(output, "output") } }
    : produces && { [produces]: {} };
  const answer = (code: number) => ({
    description: STATUS_CODES[code] ?? "",
    ...(content && code !== 204 && { content }),
  });
  return Object.fromEntries([usual, ...also].map((code) => [code, answer(code)]));
}

/** Either way in, where both are open; the list beside a key is the scope that it needs. */
function security({ may }: Endpoint): JsonSchema[] {
  if (may === "anyone") return [];
  return [
    ...(CAPABILITIES[may].roles.length > 0 ? [{ session: [] }] : []),
    ...scopesFor(may).map((scope) => ({ key: [scope] })),
  ];
}

/** `POST /api/cases/{id}/claim` → `post_cases_id_claim` */
const operationId = (key: string): string =>
  key
    .replace(" /api/", "_")
    .replace(/[^A-Za-z]+/g, "_")
    .replace(/_$/, "")
    .toLowerCase();

const SELF_EXPLAINING = new Set(["uuid", "date-time", "email", "uri"]);

function schemaOf(schema: z.ZodType, io: Direction): JsonSchema {
  const { $schema: _, ...json } = z.toJSONSchema(schema, {
    io,
    override: ({ jsonSchema }) => {
      // The formats have names; their patterns are long and say no more.
      if (SELF_EXPLAINING.has(jsonSchema.format ?? "")) delete jsonSchema.pattern;
    },
  });
  return json;
}
