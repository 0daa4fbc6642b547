import type { ImportField } from "@/lib/imports/fields";

const ATTRIBUTE_PREFIX = "attributes.";
const LONGEST_ATTRIBUTE = 64;

/** What a column becomes: a field of a payment, `attributes.<name>`, or null where it is left out. */
export type Target = string | null;

/** Other names that files give to fields, in the order of likelihood; compared without case, spaces and marks. */
const OTHER_NAMES: Readonly<Record<string, readonly string[]>> = {
  externalId: [
    "transactionid",
    "paymentid",
    "txid",
    "paymentreference",
    "transactionreference",
    "paymentref",
    "reference",
    "ref",
    "id",
  ],
  occurredAt: ["timestamp", "datetime", "transactiontime", "transactiondate", "time", "date", "when"],
  amount: ["value", "sum", "transactionamount"],
  currency: ["ccy", "currencycode", "cur"],
  channel: ["paymentchannel", "paymenttype"],
  accountId: ["account", "customeraccount", "accountnumber", "iban", "customerid", "customer"],
  counterpartyId: [
    "counterparty",
    "merchantid",
    "merchant",
    "payeeid",
    "beneficiaryid",
    "payee",
    "beneficiary",
  ],
  counterpartyName: ["merchantname", "payeename", "beneficiaryname"],
  cardRef: ["cardtoken", "cardreference", "token"],
  deviceId: ["device", "devicefingerprint"],
  ipAddress: ["ip"],
  mcc: ["merchantcategorycode", "merchantcategory"],
  counterpartyCountry: ["merchantcountry", "payeecountry", "beneficiarycountry"],
  accountCountry: ["customercountry"],
  authentication: ["authenticationmethod", "sca"],
  accountOpenedAt: ["accountopened", "openedat"],
  upstreamScore: ["score", "riskscore"],
  ruleHits: ["rules", "ruleshit"],
};

const plain = (name: string) => name.toLowerCase().replace(/[^\p{L}\p{N}]/gu, "");

/**
 * What each column most likely stands for, by its name. A field goes to the column with the best name for it, and
 * to one only; what is not recognised is left out, so that nothing comes in that nobody meant to send.
 */
export function guessTargets(names: readonly string[], fields: readonly ImportField[]): Target[] {
  const shared = sharedNames(names);
  const targets: Target[] = names.map((name) => (shared.has(name) ? null : attributeNamed(name)));
  for (const { name: field } of fields) {
    const wanted = [plain(field), ...(OTHER_NAMES[field] ?? [])];
    const at = wanted
      .map((word) =>
        names.findIndex(
          (name, index) => targets[index] === null && !shared.has(name) && plain(name) === word,
        ),
      )
      .find((index) => index >= 0);
    if (at !== undefined) targets[at] = field;
  }
  return targets;
}

/** A header that is an attribute already, such as attributes.basket. */
function attributeNamed(name: string): Target {
  return name.startsWith(ATTRIBUTE_PREFIX) ? attributeFor(name.slice(ATTRIBUTE_PREFIX.length)) : null;
}

/** The attribute that keeps a column under its own name; null where the name cannot be one. */
export function attributeFor(name: string): Target {
  const own = name.startsWith(ATTRIBUTE_PREFIX) ? name.slice(ATTRIBUTE_PREFIX.length) : name;
  const fits = own !== "" && own !== "__proto__" && own.length <= LONGEST_ATTRIBUTE && !/\p{Cc}/u.test(own);
  return fits ? `${ATTRIBUTE_PREFIX}${own}` : null;
}

/** Required fields that no column stands for yet. */
export function missingFields(targets: readonly Target[], fields: readonly ImportField[]): string[] {
  return fields.filter(({ name, required }) => required && !targets.includes(name)).map(({ name }) => name);
}

/** Targets that more than one column stands for. */
export function doubledTargets(targets: readonly Target[]): string[] {
  const taken = targets.filter((target) => target !== null);
  return [...new Set(taken.filter((target, index) => taken.indexOf(target) !== index))];
}

/** Names that several columns have: they are told apart by name, so they can only be left out. */
export function sharedNames(names: readonly string[]): Set<string> {
  return new Set(names.filter((name, index) => names.indexOf(name) !== index));
}

/** As the API takes it. */
export function mappingOf(names: readonly string[], targets: readonly Target[]): Record<string, Target> {
  return Object.fromEntries(names.map((name, index) => [name, targets[index] ?? null]));
}
