import type { ColumnMapping } from "./schema";

const ATTRIBUTE_PREFIX = "attributes.";
const NUMBER_FIELDS = new Set(["upstreamScore"]);
const BOOLEAN_FIELDS = new Set(["remote"]);
/** Several rule hits in one cell are set apart by semicolons. */
const LIST_FIELDS = new Set(["ruleHits"]);
/** Empty cells of the file stand for absent fields. */
const DECIMAL = /^-?\d{1,15}(\.\d{1,15})?$/;

/** Field of each column, in order; null for a column that is left out. A header without a mapping names the field itself. */
export function columnFields(header: readonly string[], mapping: ColumnMapping): (string | null)[] {
  return header.map((name) => {
    const trimmed = name.trim();
    const mapped = mapping[trimmed];
    return mapped === undefined ? trimmed : mapped;
  });
}

/** Fields that two columns claim, or none: an import with such a header cannot start. */
export function headerFault(fields: readonly (string | null)[]): string | null {
  const named = fields.filter((field) => field !== null);
  const twice = named.find((field, index) => named.indexOf(field) !== index);
  if (twice !== undefined) return `Two columns stand for ${twice}`;
  const missing = [
    "externalId",
    "occurredAt",
    "amount",
    "currency",
    "channel",
    "accountId",
    "counterpartyId",
  ].filter((field) => !named.includes(field));
  return missing.length > 0 ? `No column stands for ${missing.join(", ")}` : null;
}

/** A row as the item of the API; what does not look like its type stays text, so that the check can name the field. */
export function rowToItem(
  fields: readonly (string | null)[],
  cells: readonly string[],
): Record<string, unknown> {
  const item: Record<string, unknown> = {};
  const attributes: Record<string, unknown> = {};
  for (const [index, field] of fields.entries()) {
    const cell = cells[index]?.trim() ?? "";
    if (field === null || cell === "") continue;
    if (field.startsWith(ATTRIBUTE_PREFIX))
      attributes[field.slice(ATTRIBUTE_PREFIX.length)] = attributeValue(cell);
    else item[field] = fieldValue(field, cell);
  }
  if (Object.keys(attributes).length > 0) item.attributes = attributes;
  return item;
}

function fieldValue(field: string, cell: string): unknown {
  if (NUMBER_FIELDS.has(field) && DECIMAL.test(cell)) return Number(cell);
  if (BOOLEAN_FIELDS.has(field) && (cell === "true" || cell === "false")) return cell === "true";
  if (LIST_FIELDS.has(field)) return cell.split(";").flatMap((hit) => hit.trim() || []);
  return cell;
}

function attributeValue(cell: string): string | number | boolean {
  if (cell === "true" || cell === "false") return cell === "true";
  return DECIMAL.test(cell) ? Number(cell) : cell;
}
