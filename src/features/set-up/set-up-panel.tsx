import { useQuery } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { guessedOrder, moved, placed, serversOf, type OrderedArea } from './area-order.ts';
import { setUpQuery, useConfirmSetUp } from './queries.ts';

/** Where areas were found in files and nobody has said their order: the guess, to be confirmed. */
export function SetUpPanel({ siteId }: { siteId: number }) {
  const { data } = useQuery(setUpQuery(siteId));
  const [isLater, setLater] = useState(false);
  if (!data || data.confirmed || data.areas.length === 0 || isLater) return null;
  return (
    <SetUpForm
      siteId={siteId}
      order={guessedOrder(data.areas)}
      title="Is this the order of work?"
      action="Confirm this order"
      leave="Later"
      onLeave={() => setLater(true)}
    >
      It is guessed from the ways of the latest jobs, and the servers from how many were in process
      at once. Put right what is wrong; servers may be left open.
    </SetUpForm>
  );
}

/** The order of areas and their servers, to be changed and kept. */
export function SetUpForm({
  siteId,
  order: given,
  title,
  action,
  leave,
  onLeave,
  onKept,
  children,
}: {
  siteId: number;
  order: readonly OrderedArea[];
  title: string;
  action: string;
  leave: string;
  onLeave: () => void;
  onKept?: () => void;
  /** What there is to say about the order that is shown first. */
  children: ReactNode;
}) {
  const [order, setOrder] = useState(given);
  const confirm = useConfirmSetUp(siteId);
  const wanted = placed(order);
  const change = (index: number, changes: Partial<OrderedArea>) =>
    setOrder(order.map((area, each) => (each === index ? { ...area, ...changes } : area)));
  return (
    <form
      aria-label="Order of work"
      className="no-print flex max-w-4xl flex-col gap-3 border-l-4 border-water py-2 pl-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (wanted) confirm.mutate(wanted, onKept ? { onSuccess: onKept } : {});
      }}
    >
      <PanelHeading>{title}</PanelHeading>
      <p className="max-w-prose text-soft">{children}</p>
      <ol className="flex flex-col">
        {order.map((area, index) => (
          <AreaLine
            key={area.zoneId}
            area={area}
            isFirst={index === 0}
            isLast={index === order.length - 1}
            onChange={(changes) => change(index, changes)}
            onMove={(by) => setOrder(moved(order, index, by))}
          />
        ))}
      </ol>
      {confirm.error instanceof ApiError ? <ProblemNotice problem={confirm.error.problem} /> : null}
      <div className="flex gap-3">
        <Button type="submit" kind="main" isDisabled={wanted === null || confirm.isPending}>
          {action}
        </Button>
        <Button onPress={onLeave}>{leave}</Button>
      </div>
    </form>
  );
}

function AreaLine({
  area,
  isFirst,
  isLast,
  onChange,
  onMove,
}: {
  area: OrderedArea;
  isFirst: boolean;
  isLast: boolean;
  onChange: (changes: Partial<OrderedArea>) => void;
  onMove: (by: -1 | 1) => void;
}) {
  const isWrong = serversOf(area.servers) === undefined;
  return (
    <li
      className={`flex flex-wrap items-center gap-x-4 gap-y-1 border-b border-hair py-1.5 ${area.besideBefore ? 'pl-6' : ''}`}
    >
      <strong className="min-w-36 flex-1">{area.name}</strong>
      <label className="flex items-center gap-2">
        <input
          type="checkbox"
          checked={area.besideBefore}
          disabled={isFirst}
          onChange={(event) => onChange({ besideBefore: event.target.checked })}
        />
        beside the one before
      </label>
      <label className="flex items-center gap-2">
        servers
        <input
          inputMode="numeric"
          value={area.servers}
          aria-invalid={isWrong}
          onChange={(event) => onChange({ servers: event.target.value })}
          className="w-16 border border-soft bg-white px-2 py-1 text-right text-ink aria-invalid:border-over"
        />
      </label>
      <span className="flex gap-2">
        <Button
          isDisabled={isFirst}
          aria-label={`Move ${area.name} earlier`}
          onPress={() => onMove(-1)}
        >
          earlier
        </Button>
        <Button
          isDisabled={isLast}
          aria-label={`Move ${area.name} later`}
          onPress={() => onMove(1)}
        >
          later
        </Button>
      </span>
      {isWrong ? (
        <span role="alert" className="text-label text-over">
          Use a whole number of servers from 1 to 10,000, or leave it empty.
        </span>
      ) : null}
    </li>
  );
}
