import { Validator } from "@seriousme/openapi-schema-validator";
import { describe, expect, test } from "vitest";
import { z } from "zod";
import type { Endpoint } from "@/lib/endpoint";
import { ENDPOINTS } from "@/lib/endpoints";
import { openApiDocument } from "@/lib/openapi";

const Operation = z.looseObject({
  operationId: z.string(),
  summary: z.string(),
  security: z.array(z.record(z.string(), z.array(z.string()))),
  parameters: z
    .array(z.object({ name: z.string(), in: z.string(), required: z.boolean(), schema: z.looseObject({}) }))
    .default([]),
  requestBody: z.looseObject({ content: z.record(z.string(), z.unknown()) }).optional(),
  responses: z.record(z.string(), z.unknown()),
});
const Document = z.looseObject({ paths: z.record(z.string(), z.record(z.string(), Operation)) });

const document = openApiDocument(ENDPOINTS, "https://desk.example");
const { paths } = Document.parse(document);
const endpoints: [string, Endpoint][] = Object.entries(ENDPOINTS);

const operationOf = (key: string) => {
  const [method = "", path = ""] = key.split(" ");
  return paths[path]?.[method.toLowerCase()];
};

// The JSON Schema of OpenAPI 3.1 that the OpenAPI Initiative publishes, run by another's validator.
test("the document is a valid OpenAPI 3.1 document", async () => {
  const result = await new Validator().validate(structuredClone(document));
  expect(result.errors ?? []).toEqual([]);
  expect(result.valid).toBe(true);
});

test("every endpoint is in the document, and nothing else", () => {
  const described = Object.entries(paths).flatMap(([path, operations]) =>
    Object.keys(operations).map((method) => `${method.toUpperCase()} ${path}`),
  );
  expect(described.sort()).toEqual(Object.keys(ENDPOINTS).sort());
});

test("operation ids are unique", () => {
  const ids = endpoints.map(([key]) => operationOf(key)?.operationId);
  expect(new Set(ids).size).toBe(ids.length);
});

describe.each(endpoints)("%s", (key, endpoint) => {
  const operation = operationOf(key);

  test("names every field of its input once, in the path, the query or the body", () => {
    const inParameters = operation?.parameters.filter(({ in: place }) => place !== "header") ?? [];
    const body = operation?.requestBody?.content["application/json"] as
      | { schema: { properties: Record<string, unknown> } }
      | undefined;
    const named = [...inParameters.map(({ name }) => name), ...Object.keys(body?.schema.properties ?? {})];
    expect(named.sort()).toEqual(Object.keys(endpoint.input.shape).sort());
    for (const { in: place, name, required } of inParameters) {
      expect(place === "path").toBe(key.includes(`{${name}}`));
      if (place === "path") expect(required).toBe(true);
    }
  });

  test("says who may call it, what it answers and how it refuses", () => {
    expect(operation?.security.length === 0).toBe(endpoint.may === "anyone");
    expect(Object.keys(operation?.responses ?? {})).toContain("default");
    const success = Object.keys(operation?.responses ?? {}).filter((status) => /^2\d\d$/.test(status));
    expect(success).not.toEqual([]);
    for (const status of endpoint.also ?? []) expect(operation?.responses).toHaveProperty([String(status)]);
  });
});

test("fields with a default may be left out by the caller and are always in the answer", () => {
  const Sample = z.strictObject({ id: z.uuid(), limit: z.coerce.number().int().max(9).default(3) });
  const sample = openApiDocument(
    {
      "POST /api/samples/{id}": { summary: "S", may: "desk.work", input: Sample, output: Sample },
    },
    "https://desk.example",
  );
  const operation = Document.parse(sample).paths["/api/samples/{id}"]?.post;
  expect(operation?.requestBody).toEqual({
    required: false,
    content: {
      "application/json": {
        schema: {
          type: "object",
          properties: {
            limit: { default: 3, type: "integer", maximum: 9, minimum: Number.MIN_SAFE_INTEGER },
          },
          additionalProperties: false,
        },
      },
    },
  });
  expect(operation?.responses["200"]).toMatchObject({
    content: { "application/json": { schema: { required: ["id", "limit"] } } },
  });
  expect(operation?.security).toEqual([{ session: [] }, { key: ["cases:decide"] }]);
});
