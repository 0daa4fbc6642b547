/** The cupel: a shallow dish and the bead that is left in it. */
export function Mark() {
  return (
    <svg aria-hidden="true" viewBox="0 0 32 32" className="size-5">
      <path
        d="M2 12h28c0 8-5 14-10 16h-8C7 26 2 20 2 12Zm4.6 3c1 4.6 4.7 8 9.4 8s8.4-3.4 9.4-8Z"
        fillRule="evenodd"
        className="fill-ink"
      />
      <circle cx="16" cy="11.5" r="5.5" className="fill-ochre" />
    </svg>
  );
}
