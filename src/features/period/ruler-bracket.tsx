import { useState, type KeyboardEvent, type PointerEvent } from 'react';
import { momentOn, nearest, placeOn, type RulerScale } from '../../charts/ruler-scale.ts';
import { moveBracket, stepBracket, type Bracket, type Grip } from './bracket.ts';

const handleWidth = 24;

/** What is being dragged, from where, and where it now stands; null until it has moved. */
interface Held {
  grip: Grip;
  at: number;
  before: Bracket;
  now: Bracket | null;
}

function gripUnder(target: EventTarget): Grip {
  const part = target instanceof Element ? target.closest('[data-grip]') : null;
  const grip = part?.getAttribute('data-grip');
  return grip === 'from' || grip === 'to' || grip === 'both' ? grip : 'new';
}

/**
 * The period as a bracket over the ruler. Drag it or an end of it, or draw a new one beside it; by keyboard
 * the arrow keys move by a day, page keys by a week, Home and End as far as the data go. It snaps to days.
 *
 * @param days borders of local days that the ruler spans, in order
 */
export function RulerBracket({
  scale,
  days,
  period,
  height,
  nameOf,
  onChange,
}: {
  scale: RulerScale;
  days: readonly number[];
  period: Bracket;
  height: number;
  nameOf: (at: number) => string;
  onChange: (period: Bracket) => void;
}) {
  const [held, setHeld] = useState<Held | null>(null);
  const shown = held?.now ?? period;
  const under = (event: PointerEvent<SVGSVGElement>) =>
    momentOn(scale, event.clientX - event.currentTarget.getBoundingClientRect().left);
  const begin = (event: PointerEvent<SVGSVGElement>) => {
    if (event.button !== 0) return;
    event.currentTarget.setPointerCapture(event.pointerId);
    setHeld({ grip: gripUnder(event.target), at: under(event), before: period, now: null });
  };
  const follow = (event: PointerEvent<SVGSVGElement>) => {
    if (!held) return;
    const now = moveBracket(days, held.before, held.grip, held.at, under(event));
    setHeld({ ...held, now });
  };
  const end = () => {
    if (held?.now) onChange(held.now);
    setHeld(null);
  };
  const steer = (grip: Grip) => (event: KeyboardEvent) => {
    const next = stepBracket(days, period, grip, event.key);
    if (!next) return;
    event.preventDefault();
    onChange(next);
  };
  const [x1, x2] = [placeOn(scale, shown.from), placeOn(scale, shown.to)];
  const ends = { min: days[0] ?? 0, max: days.at(-1) ?? 0 };
  const slider = (grip: Grip, name: string, at: number, text: string) => ({
    role: 'slider',
    tabIndex: 0,
    'aria-label': name,
    'aria-valuemin': ends.min,
    'aria-valuemax': ends.max,
    'aria-valuenow': nearest(days, at),
    'aria-valuetext': text,
    'data-grip': grip,
    onKeyDown: steer(grip),
  });
  const lastDay = nameOf(shown.to - 1);
  return (
    <svg
      width={scale.width}
      height={height}
      className="absolute inset-0 touch-none overflow-visible"
      onPointerDown={begin}
      onPointerMove={follow}
      onPointerUp={end}
      onPointerCancel={() => setHeld(null)}
    >
      <rect width={scale.width} height={height} fill="transparent" className="cursor-crosshair" />
      <g
        {...slider('both', 'Period in view', shown.from, `${nameOf(shown.from)} to ${lastDay}`)}
        className="cursor-grab"
      >
        <rect
          x={x1}
          y={2}
          width={Math.max(2, x2 - x1)}
          height={height - 3}
          className="fill-water stroke-ink"
          fillOpacity={0.12}
          strokeWidth={2}
        />
      </g>
      {[
        {
          grip: 'from' as const,
          x: x1,
          name: 'First day',
          at: shown.from,
          text: nameOf(shown.from),
        },
        { grip: 'to' as const, x: x2, name: 'Last day', at: shown.to, text: lastDay },
      ].map(({ grip, x, name, at, text }) => (
        <g key={grip} {...slider(grip, name, at, text)} className="cursor-ew-resize">
          <rect x={x - handleWidth / 2} width={handleWidth} height={height} fill="transparent" />
          <line x1={x} x2={x} y1={1} y2={height} className="stroke-ink" strokeWidth={4} />
        </g>
      ))}
    </svg>
  );
}
