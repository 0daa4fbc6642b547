import { TransactionItem } from "../transactions/schema";

export const ATTRIBUTE_PREFIX = "attributes.";

export type ImportField = { name: string; required: boolean };

/** Fields of a payment that a column can stand for, in the order of the API; attributes have a column each. */
export const IMPORT_FIELDS: readonly ImportField[] = Object.entries(TransactionItem.shape)
  .filter(([name]) => name !== "attributes")
  .map(([name, schema]) => ({ name, required: !schema.safeParse(undefined).success }));

const NAMES = new Set(IMPORT_FIELDS.map(({ name }) => name));
/** As long as the name of an attribute may be; `__proto__` is no name that an object can hold. */
const ATTRIBUTE = /^attributes\.(?!__proto__$)[^\p{Cc}\p{Cs}]{1,64}$/u;

export function isImportField(name: string): boolean {
  return NAMES.has(name) || ATTRIBUTE.test(name);
}
