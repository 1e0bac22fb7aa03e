import { eventKinds, type EventKind, type EventWords } from '../../../shared/contracts/plan.ts';
import { foldWord } from '../shapes/word-table.ts';

/**
 * Words by which systems commonly say what happened to a job (common practice, collected by hand), and the
 * life cycle of activities of IEEE 1849-2016.
 */
const common: Readonly<Record<EventKind, string>> = {
  arrived: `arrive, arrived, arrival, arrives, queue, queued, queue in, enqueue, enqueued, in queue, received, receive,
    receipt, ready, released, release, move in, moved in, schedule, scheduled, assign, assigned, in, enter, entered, ankunft,
    zugang, eingang, bereit, arrivee, entree, llegada, entrada, arrivo, ingresso, aankomst`,
  started: `start, started, starts, begin, began, begun, track in, trackin, log on, logon, clock on, on, process start, setup,
    resume first, beginn, begonnen, gestartet, anfang, debut, commence, inicio, iniciado, comienzo, inizio, iniziato, gestart`,
  finished: `finish, finished, finishes, end, ended, ends, complete, completed, completion, track out, trackout, log off, logoff,
    clock off, off, done, close, closed, out, leave, left, departed, departure, move out, moved out, process end,
    ende, beendet, fertig, fertiggemeldet, abgeschlossen, fin, termine, terminado, finalizado, fine, finito, gereed, klaar`,
  scrapped: `scrap, scrapped, reject, rejected, condemned, destroyed, ausschuss, verschrottet, rebut, desecho, scarto, uitval`,
  cancelled: `cancel, cancelled, canceled, cancellation, void, voided, abort, aborted, withdraw, withdrawn, ate abort,
    ate_abort, pi abort, pi_abort, storno, storniert, abgebrochen, annule, cancelado, annullato, geannuleerd`,
  ignored: `pause, paused, suspend, suspended, resume, resumed, hold, on hold, break, interrupt, interrupted, continue,
    note, comment, print, printed, autoskip, manualskip, reassign, unterbrochen, unterbrechung, fortgesetzt`,
};

const meanings = new Map<string, EventKind>(
  eventKinds.flatMap((kind) =>
    common[kind].split(',').map((word) => [foldWord(word).replace(/\s+/g, ' '), kind] as const),
  ),
);

/** What a word of an event column commonly means, or null. */
export function commonEventMeaning(word: string): EventKind | null {
  const folded = foldWord(word)
    .normalize('NFD')
    .replace(/\p{M}/gu, '')
    .replace(/[\s_-]+/g, ' ');
  return meanings.get(folded) ?? meanings.get(foldWord(word)) ?? null;
}

/** The words of a column by what they commonly mean; words that are not known are left out. */
export function guessEventWords(cells: readonly string[]): EventWords {
  const found: Partial<Record<EventKind, string[]>> = {};
  const seen = new Set<string>();
  for (const cell of cells) {
    const word = cell.trim();
    const folded = foldWord(word);
    const kind = commonEventMeaning(word);
    if (word === '' || kind === null || seen.has(folded)) continue;
    seen.add(folded);
    (found[kind] ??= []).push(word);
  }
  return found;
}

/** The words of a status column that commonly end a stay otherwise than as a good departure. */
export function guessStatusWords(
  cells: readonly string[],
): Pick<EventWords, 'scrapped' | 'cancelled'> {
  const { scrapped, cancelled } = guessEventWords(cells);
  return { ...(scrapped ? { scrapped } : {}), ...(cancelled ? { cancelled } : {}) };
}
