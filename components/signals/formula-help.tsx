import { FORMULA_FIELDS } from "@/lib/signals/formula-fields";
import { Table, Td, Th } from "../ui/table";

const KIND_WORDS = { number: "number", yes_no: "yes or no, as 1 or 0", text: "text" } as const;

const SIGNS: readonly (readonly [string, string])[] = [
  ["+ − × ÷ ^ %", "Arithmetic; % is the remainder of a division"],
  ["< <= > >= == !=", "Comparison: yes or no. Texts stand in double quotes and know == and != only"],
  ["and or not", "A later part is looked at only where the earlier one leaves it open"],
  ["condition ? a : b", "a where the condition holds, else b"],
  ["min max abs sqrt exp log log10", "log is the natural one, log(x, base) any other"],
  ["attributes.name", 'What the sender passes along; attributes["with spaces"] where the name needs it'],
];

/** What a formula may be written with, for whoever writes one; closed until wanted. */
export function FormulaHelp() {
  return (
    <details>
      <summary className="w-fit text-small underline decoration-edge underline-offset-4">
        What a formula can be written with
      </summary>
      <Table caption="Signs and functions" className="mt-2 text-small">
        <thead>
          <tr>
            <Th>Sign</Th>
            <Th>Meaning</Th>
          </tr>
        </thead>
        <tbody>
          {SIGNS.map(([sign, meaning]) => (
            <tr key={sign}>
              <Td className="font-mono">{sign}</Td>
              <Td>{meaning}</Td>
            </tr>
          ))}
        </tbody>
      </Table>
      <Table caption="Fields of a payment" className="mt-3 text-small">
        <thead>
          <tr>
            <Th>Field</Th>
            <Th>Kind</Th>
            <Th>What it is</Th>
          </tr>
        </thead>
        <tbody>
          {FORMULA_FIELDS.map(({ name, kind, sentence }) => (
            <tr key={name}>
              <Td className="font-mono">{name}</Td>
              <Td>{KIND_WORDS[kind]}</Td>
              <Td>{sentence}</Td>
            </tr>
          ))}
        </tbody>
      </Table>
      <p className="mt-2 text-small text-soft">
        A field that is missing, or a result that is no finite number, makes the signal not available for that
        payment: it then says nothing. Accounts, counterparties, cards and devices cannot be named.
      </p>
    </details>
  );
}
