import { timeColumns, type TimeColumn } from '../../../shared/contracts/plan.ts';
import type { GuessedColumn } from './found-columns.ts';

/**
 * Words that headers commonly use for each column, in several languages (common practice, collected by
 * hand). A phrase is compared word by word, without accents and case.
 */
const phrases: Readonly<Record<GuessedColumn, string>> = {
  job: `job, job no, job number, job id, job key, order, order no, order number, order id, work order,
    work order number, wo, wo number, shop order, production order, serial, serial no, serial number, sn,
    lot, lot id, lot number, batch, batch number, case, case id, ticket, traveller, traveler, unit id,
    auftrag, auftragsnummer, auftragsnr, fertigungsauftrag, seriennummer, charge, chargennummer,
    ordre, ordre de fabrication, of, commande, numero de serie, lot de fabrication,
    orden, orden de trabajo, numero de orden, numero de serie, lote, pedido,
    ordine, ordine di lavoro, commessa, matricola, lotto, numero di serie,
    opdracht, opdrachtnummer, werkorder, ordernummer, serienummer, partij,
    ordem, ordem de producao, numero de ordem, tillverkningsorder, serienr, zlecenie, nr zlecenia, partia`,
  area: `area, station, workstation, work station, operation, operation name, op, step, process step,
    work centre, work center, workcentre, workcenter, department, dept, cell, bay, zone, line, machine,
    resource group, location, activity, stage, queue name,
    bereich, arbeitsplatz, arbeitsgang, vorgang, abteilung, anlage, platz, kostenstelle, prozessschritt,
    poste, poste de travail, atelier, etape, secteur, machine de production,
    puesto, puesto de trabajo, estacion, operacion, seccion, departamento, etapa, area de trabajo,
    stazione, operazione, reparto, fase, centro di lavoro, postazione,
    afdeling, bewerking, werkplek, werkstation, bewerkingsstap,
    estacao, operacao, setor, posto, station namn, avdelning, arbetsstation, stanowisko, operacja, wydzial`,
  arrived: `arrival, arrived, arrival time, arrive, queue in, queued, queued at, queue start, queue entry,
    received, received at, ready, ready at, released, release, in queue since, entered, entry, time in,
    check in, enqueued, ankunft, eingang, zugang, bereit, arrivee, entree, reception, llegada, entrada,
    recepcion, arrivo, ingresso, aankomst, binnenkomst, chegada, ankomst, przybycie, wejscie`,
  started: `start, started, start time, start date, started at, begin, began, begin time, process start,
    actual start, track in, logon, clock on, beginn, startzeit, anfang, startzeitpunkt, debut,
    date de debut, heure de debut, inicio, fecha inicio, comienzo, inizio, data inizio, begintijd,
    starttijd, aanvang, inicio real, starttid, rozpoczecie, poczatek`,
  finished: `finish, finished, finish time, finish date, finished at, end, ended, end time, end date,
    complete, completed, completion, completed at, completion time, done, closed, process end, actual end,
    actual finish, track out, logoff, clock off, time out, check out, departure, left, exit,
    ende, endzeit, fertig, fertigmeldung, abschluss, endzeitpunkt, fin, date de fin, heure de fin,
    termine, sortie, final, fecha fin, terminado, salida, fine, data fine, termine lavoro, uscita,
    einde, eindtijd, gereed, fim, termino, saida, slut, sluttid, klar, koniec, zakonczenie`,
  record: `record id, record no, record key, transaction id, transaction no, row id, entry id, event id,
    booking id, buchungsnummer, satznummer`,
  quantity: `quantity, qty, units, pieces, pcs, count, number of units, menge, stueck, stuck, anzahl,
    quantite, nombre, cantidad, piezas, quantita, pezzi, aantal, stuks, quantidade, antal, ilosc`,
  family: `family, product family, product, product group, part number, part no, part, item, item number,
    material, model, sku, type, produkt, produktfamilie, artikel, artikelnummer, materialnummer, produit,
    famille, article, producto, familia, articulo, prodotto, famiglia, articolo, produto, wyrob`,
  due: `due, due date, due at, due time, required by, required date, need by, promised, promise date,
    deadline, liefertermin, termin, faellig, fallig, echeance, date due, fecha de entrega, vencimiento,
    scadenza, data consegna, leverdatum, prazo, leveransdatum, termin dostawy`,
  priority: `priority, prio, urgency, rank, prioritaet, prioritat, priorite, prioridad, priorita,
    prioriteit, prioridade, prioritet, priorytet`,
  workContent: `work content, standard hours, standard time, std hours, planned hours, planned time,
    vorgabezeit, sollzeit, temps standard, tiempo estandar, tempo standard, normtijd`,
  value: `value, job value, order value, price, amount, wert, auftragswert, valeur, prix, valor, precio,
    valore, prezzo, waarde, prijs, varde, wartosc`,
  resource: `resource, operator, worker, employee, technician, user, person, machine id, equipment,
    bediener, mitarbeiter, maschine, operateur, employe, operario, operatore, medewerker, operador,
    operator id, pracownik`,
  status: `status, state, result, outcome, disposition, zustand, ergebnis, statut, etat, resultat, estado,
    resultado, stato, esito, toestand, resultaat, situacao, tillstand, stan`,
  event: `event, event type, event name, event code, transaction, transaction type, movement,
    movement type, transition, lifecycle, lifecycle transition, action, activity type, booking type, kind,
    what, ereignis, ereignistyp, ereignisart, buchungsart, meldungsart, bewegungsart, evenement,
    type evenement, evento, tipo evento, tipo de evento, movimiento, gebeurtenis, handelse, zdarzenie`,
  time: `time, timestamp, time stamp, date time, datetime, date, event time, event date, at, when, logged at,
    recorded at, created at, booked at, transaction time, transaction date, zeit, zeitpunkt,
    zeitstempel, uhrzeit, datum, buchungszeit, heure, horodatage, date heure, hora, fecha, fecha hora,
    marca de tiempo, ora, data ora, tijd, tijdstip, momento, tid, tidpunkt, czas`,
  parent: `parent, parent job, parent order, parent lot, parent serial, master order, main order,
    hauptauftrag, ordre parent, orden padre, ordine padre, hoofdorder`,
};

/** Words that show a header to speak of something beside the column: an order's type is not the order. */
const besides = new Set(
  `type kind name description text status state date time datum zeit qty quantity menge count priority
  comment note remark user operator by reason code group size value price duration minutes hours seconds
  scrap planned plan scheduled expected estimated target`.split(/\s+/),
);

/** Words that show a time to be what was planned, not what happened. */
const plans = new Set(
  `planned plan scheduled schedule expected estimated target latest earliest geplant plan soll prevu
  prevue planificado previsto pianificato gepland planejado planerad planowany`.split(/\s+/),
);

/** The words of a header: split at case changes and anything that is no letter, without accents. */
export function wordsOf(header: string): string[] {
  return header
    .replace(/(\p{Ll})(\p{Lu})/gu, '$1 $2')
    .replaceAll('ß', 'ss')
    .replace(/[łŁ]/g, 'l')
    .normalize('NFD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .split(/[^\p{L}]+/u)
    .filter((word) => word !== '');
}

/** Whether words speak of what was planned, or of something beside a thing, and so name none. */
export const namesNothing = (words: readonly string[]): boolean =>
  words.every(
    (word) => besides.has(word) || plans.has(word) || word === 'actual' || word === 'process',
  );

const phraseWords = Object.fromEntries(
  Object.entries(phrases).map(([column, list]) => [
    column,
    list.split(',').map((phrase) => phrase.trim().split(/\s+/)),
  ]),
) as unknown as Readonly<Record<GuessedColumn, readonly (readonly string[])[]>>;

/** From this score on the whole header is a phrase for the column. */
export const wholeHeaderScore = 100;

/**
 * How well a header fits a column by its words: 0 not at all; more for longer phrases, most where the
 * phrase is the whole header.
 */
export function wordScore(column: GuessedColumn, words: readonly string[]): number {
  const fits = phraseWords[column].filter((phrase) => contains(words, phrase));
  if (fits.length === 0) return 0;
  const longest = Math.max(...fits.map((phrase) => phrase.length));
  if (longest === words.length) return wholeHeaderScore + longest;
  const rest = words.filter((word) => !fits.some((phrase) => phrase.includes(word)));
  const others = isTime(column) ? plans : besides;
  const meansOther = column !== 'due' && rest.some((word) => others.has(word));
  return meansOther ? 0 : Math.max(1, 10 * longest - rest.length);
}

/** Phrases for one of the three times, word by word, longest first. */
export const timePhrases: readonly { column: TimeColumn; words: readonly string[] }[] = timeColumns
  .flatMap((column) => phraseWords[column].map((words) => ({ column, words })))
  .sort((a, b) => b.words.length - a.words.length);

const isTime = (column: GuessedColumn): boolean => timeColumns.some((each) => each === column);

function contains(words: readonly string[], phrase: readonly string[]): boolean {
  return words.some((_, at) => phrase.every((word, index) => words[at + index] === word));
}
