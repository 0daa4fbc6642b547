import { ATTRIBUTE_PREFIX, IMPORT_FIELDS, isImportField } from "./fields";
import type { ColumnMapping } from "./schema";

const NUMBER_FIELDS = new Set(["upstreamScore"]);
const BOOLEAN_FIELDS = new Set(["remote"]);
/** Several rule hits in one cell are set apart by semicolons. */
const LIST_FIELDS = new Set(["ruleHits"]);
/** Numbers as programs write them, down to 1.5e-07. */
const NUMBER = /^-?\d{1,15}(\.\d{1,20})?(e[+-]?\d{1,2})?$/i;
/** An attribute with a leading zero is an identifier, and so may be one with an exponent. */
const PLAIN_NUMBER = /^-?(0|[1-9]\d{0,14})(\.\d{1,15})?$/;

/** Field of each column, in order; null for a column that is left out. A header without a mapping names the field itself. */
export function columnFields(header: readonly string[], mapping: ColumnMapping): (string | null)[] {
  return header.map((cell) => {
    const name = cell.trim();
    // A header may be called like something that every object has.
    return Object.hasOwn(mapping, name) ? (mapping[name] ?? null) : name;
  });
}

/**
 * Why an import with such columns cannot start; null where it can. Columns that are not ours are told by their
 * place: a file without a header has somebody's data in their names.
 */
export function headerFault(fields: readonly (string | null)[]): string | null {
  const unknown = fields.findIndex((field) => field !== null && !isImportField(field));
  if (unknown >= 0) {
    return `Column ${unknown + 1} is no field of a payment: map it, call it ${ATTRIBUTE_PREFIX}<name> or leave it out`;
  }
  const named = fields.filter((field) => field !== null);
  const twice = named.find((field, index) => named.indexOf(field) !== index);
  if (twice !== undefined)
    return `Two columns stand for ${twice.startsWith(ATTRIBUTE_PREFIX) ? "one attribute" : twice}`;
  const missing = IMPORT_FIELDS.filter(({ name, required }) => required && !named.includes(name));
  if (missing.length === 0) return null;
  return `No column stands for ${missing.map(({ name }) => name).join(", ")}`;
}

/**
 * A row as the item of the API. Empty cells stand for absent fields; what does not look like its type stays text, so
 * that the check can name the field.
 */
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
  if (NUMBER_FIELDS.has(field) && NUMBER.test(cell)) return Number(cell);
  if (BOOLEAN_FIELDS.has(field)) return booleanOf(cell) ?? cell;
  if (LIST_FIELDS.has(field)) return cell.split(";").flatMap((hit) => hit.trim() || []);
  return cell;
}

function attributeValue(cell: string): string | number | boolean {
  return booleanOf(cell) ?? (PLAIN_NUMBER.test(cell) ? Number(cell) : cell);
}

/** Spreadsheets write TRUE. */
function booleanOf(cell: string): boolean | null {
  const lower = cell.toLowerCase();
  return lower === "true" ? true : lower === "false" ? false : null;
}
