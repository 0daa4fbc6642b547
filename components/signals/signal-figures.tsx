import type { SignalFigures } from "@/lib/signals/own-schema";
import { countText } from "../ui/count";
import { percentOf } from "../ui/probability";
import { Table, Td, Th } from "../ui/table";
import { numberText } from "./number-text";
import { ScaledHistogram } from "./scaled-histogram";

/** What a formula measures on the newest payments. */
export function SignalFiguresView({ figures }: { figures: SignalFigures }) {
  const { payments, available, values, histogram, samples, labelled } = figures;
  if (payments === 0) return <p className="text-soft">No payment has come in yet to try it on.</p>;
  return (
    <div className="flex flex-col gap-4">
      <p>
        Available in {countText(available)} of the newest {countText(payments)} payments (
        {percentOf(available / payments)} %).
        {values && (
          <>
            {" "}
            Least {numberText(values.min)}, median {numberText(values.median)}, most {numberText(values.max)}.
          </>
        )}
      </p>
      {histogram.length > 0 && <ScaledHistogram histogram={histogram} />}
      <p>
        {labelled ? (
          <>
            On labelled payments its mean is {signed(labelled.fraudulent.mean)} for fraud (
            {countText(labelled.fraudulent.count)}) and {signed(labelled.legitimate.mean)} for legitimate (
            {countText(labelled.legitimate.count)}): a difference of{" "}
            <strong>{signed(labelled.difference)}</strong> on the scale from −1 to 1.
          </>
        ) : (
          "Too few labelled payments have it to compare fraud with legitimate."
        )}
      </p>
      <Table caption="On the newest payments" className="text-small">
        <thead>
          <tr>
            <Th>Payment</Th>
            <Th numeric>Value</Th>
          </tr>
        </thead>
        <tbody>
          {samples.map(({ externalId, value }) => (
            <tr key={externalId}>
              <Td className="font-mono break-all">{externalId}</Td>
              <Td numeric>{value === null ? "not available" : numberText(value)}</Td>
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}

function signed(value: number): string {
  const text = Math.abs(value).toFixed(2);
  if (text === "0.00") return text;
  return value > 0 ? `+${text}` : `−${text}`;
}
