import { Label, ProgressBar } from 'react-aria-components';

/** How far something has come, in words and as a gauge. */
export function Progress({
  label,
  share,
  words,
}: {
  label: string;
  share: number | null;
  words: string;
}) {
  return (
    <ProgressBar
      {...(share === null ? { isIndeterminate: true } : { value: Math.round(share * 100) })}
      className="flex flex-col gap-1"
    >
      <div className="flex justify-between gap-4">
        <Label>{label}</Label>
        <span className="text-soft">{words}</span>
      </div>
      <svg width="100%" height="8" aria-hidden="true" className="border border-ink bg-white">
        <rect width={`${(share ?? 0) * 100}%`} height="8" className="fill-water" />
      </svg>
    </ProgressBar>
  );
}
