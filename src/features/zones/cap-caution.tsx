/** Stands wherever a cap is shown: it decides who waits. */
export function CapCaution() {
  return (
    <p className="max-w-prose border-l-4 border-ink py-1 pl-3 text-label">
      A cap decides who waits. In clinical, food-safety, hazardous-goods or emergency work it must
      never hold back urgent work; the site’s procedures and licensed judgement come first.
    </p>
  );
}
