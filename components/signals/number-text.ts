/** A measure as people read it: at most four significant places, a minus that is one. */
export function numberText(value: number): string {
  const rounded = Number(value.toPrecision(4));
  const text = Math.abs(rounded) >= 1e9 ? rounded.toExponential(3) : String(rounded);
  return text.replace("-", "−").replace(/\B(?=(\d{3})+(?!\d|\.\d))(?<!\.\d*)/g, "\u202f");
}
