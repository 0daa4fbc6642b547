/** What everybody who decides about people's money should have before them. */
export function Cautions() {
  return (
    <div className="max-w-[80ch] text-small text-soft">
      <p>
        The score is advice; a person decides. A verdict affects somebody's money, and holding or refusing a
        payment has legal duties: local codes, licensed practice, data protection and, in the EU, the right to
        human intervention and an explanation.
      </p>
      <p className="mt-1">
        A suspicion report is confidential: tell neither the customer nor anyone else that one was or may be
        made. Keep records as long as local law says, and no longer.
      </p>
    </div>
  );
}
