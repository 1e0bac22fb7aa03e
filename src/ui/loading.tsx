/** What stands where figures will stand. */
export function Loading({ what }: { what: string }) {
  return (
    <div
      role="status"
      className="animate-pulse border-l-4 border-hair py-2 pl-3 text-soft motion-reduce:animate-none"
    >
      Loading {what} …
    </div>
  );
}
