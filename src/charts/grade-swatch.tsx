import { useId } from 'react';
import type { TrustGrade } from '../../shared/trust.ts';

/** Each grade has a hatching of its own, so that none is told by colour: the fuller the better. */
export function GradePatterns({ id }: { id: string }) {
  return (
    <defs>
      <pattern id={`${id}-settling`} width={6} height={6} patternUnits="userSpaceOnUse">
        <rect width={6} height={6} className="fill-mist" />
        <circle cx={1.5} cy={1.5} r={1} className="fill-water" />
        <circle cx={4.5} cy={4.5} r={1} className="fill-water" />
      </pattern>
      <pattern id={`${id}-coarse`} width={5} height={5} patternUnits="userSpaceOnUse">
        <rect width={5} height={5} className="fill-white" />
        <path d="M0 2.5H5" strokeWidth={2} className="stroke-slate" />
      </pattern>
      <pattern id={`${id}-inferred`} width={6} height={6} patternUnits="userSpaceOnUse">
        <rect width={6} height={6} className="fill-driftwash" />
        <path d="M-1 7L7 -1M-1 1L1 -1M5 7L7 5" strokeWidth={1.4} className="stroke-drift" />
      </pattern>
      <pattern id={`${id}-missing`} width={8} height={8} patternUnits="userSpaceOnUse">
        <rect width={8} height={8} className="fill-white" />
        <path d="M0 0L8 8M8 0L0 8" strokeWidth={1.6} className="stroke-ink" />
      </pattern>
    </defs>
  );
}

/** How a grade is filled, from the patterns with this id. */
export const gradeFill = (id: string, grade: TrustGrade): { className?: string; fill?: string } =>
  grade === 'covered' ? { className: 'fill-wash' } : { fill: `url(#${id}-${grade})` };

/** A small field in a grade's hatching, beside its word. */
export function GradeSwatch({ grade }: { grade: TrustGrade }) {
  const id = useId();
  return (
    <svg width={16} height={12} viewBox="0 0 16 12" className="inline-block" aria-hidden="true">
      <GradePatterns id={id} />
      <rect width={16} height={12} {...gradeFill(id, grade)} />
      <rect x={0.5} y={0.5} width={15} height={11} fill="none" className="stroke-soft" />
    </svg>
  );
}
