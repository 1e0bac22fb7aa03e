import type { AreaMove } from '../../../shared/contracts/areas.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { ApiError } from '../../api/api-error.ts';
import { formatMoment, plural } from '../../lib/format.ts';
import { ConfirmDialog } from '../../ui/confirm-dialog.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { useUndoMove } from './queries.ts';
import { moveInWords, undoing } from './words.ts';

/** The moves in force, newest first; each can be taken back by those who may. */
export function MoveList({
  site,
  moves,
  mayChange,
}: {
  site: Site;
  moves: readonly AreaMove[];
  mayChange: boolean;
}) {
  const undo = useUndoMove(site.id);
  return (
    <section>
      <PanelHeading>Rows that count for another area</PanelHeading>
      {undo.error instanceof ApiError ? <ProblemNotice problem={undo.error.problem} /> : null}
      {moves.length === 0 ? (
        <p className="py-2 text-soft">None: every row counts for the area that its file names.</p>
      ) : null}
      <ul>
        {moves.toReversed().map((move) => (
          <li
            key={move.id}
            className="flex flex-wrap items-center justify-between gap-3 border-b border-hair py-2"
          >
            <span>
              <strong>{moveInWords(move, site.timeZone)}</strong>{' '}
              <span className="text-soft">
                {plural(move.rows, 'row')} so far · {move.movedBy ?? 'by itself'},{' '}
                {formatMoment(move.movedAt, site.timeZone)}
              </span>
            </span>
            {mayChange ? (
              <ConfirmDialog
                trigger="Take this back"
                title={`Shall it no longer hold that ${moveInWords(move, site.timeZone)}?`}
                action="Take this back"
                onConfirm={() => undo.mutate(move.id)}
              >
                {undoing(move)}
              </ConfirmDialog>
            ) : null}
          </li>
        ))}
      </ul>
    </section>
  );
}
