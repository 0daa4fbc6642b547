/** Groups of three apart by a narrow no-break space: "1234567.89" → "1 234 567.89". */
function grouped(amount: string): { whole: string; fraction: string } {
  const [whole = "", fraction] = amount.split(".");
  const spaced = whole.replace(/\B(?=(\d{3})+(?!\d))/g, "\u202f").replace(/^-/, "−");
  return { whole: spaced, fraction: fraction === undefined ? "" : `.${fraction}` };
}

type AmountProps = {
  /** Decimal string of the API. */
  amount: string;
  currency: string;
  /** In a column: keeps the decimal marks of all currencies beneath one another. */
  aligned?: boolean;
};

export function Amount({ amount, currency, aligned = false }: AmountProps) {
  const { whole, fraction } = grouped(amount);
  const code = <span className="ml-1 text-[0.85em] text-soft">{currency}</span>;
  if (!aligned) {
    return (
      <span className="figures whitespace-nowrap">
        {whole}
        {fraction}
        {code}
      </span>
    );
  }
  return (
    <span className="figures inline-flex justify-end whitespace-nowrap">
      <span>{whole}</span>
      <span className="w-[4ch] text-left">{fraction}</span>
      <span className="w-[4ch] text-left">{code}</span>
    </span>
  );
}
