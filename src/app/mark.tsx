/** The sign of the product: a level held by a weir, and the mark above it. */
export function Mark() {
  return (
    <svg width="26" height="20" viewBox="0 0 26 20" aria-hidden="true">
      <path className="fill-water" d="M1 8h7l2 4h6l2-4h7v11H1z" />
      <path className="fill-ink" d="M1 2h24v2.5H1z" />
    </svg>
  );
}
