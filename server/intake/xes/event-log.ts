import { BuiltRow } from '../built-row.ts';
import { columnLimit } from '../limits.ts';
import type { OnRow } from '../opened-file.ts';
import type { XmlAttributes, XmlHandler } from '../xml/xml-reader.ts';

/** What attributes belong to: the column of a key is named by both, as `event concept:name`. */
export type Scope = 'trace' | 'event';

/** An attribute with one value, as text. */
interface XesAttribute {
  key: string;
  value: string;
}

/** Elements that hold one value; lists and containers, and attributes of attributes, are left out. */
const valueTypes = new Set(['string', 'date', 'int', 'float', 'boolean', 'id']);
/** Characters of an event's description. */
const rawLength = 4000;

/** The columns of an event log: an attribute of the traces or of the events each. */
export class EventColumns {
  readonly header: string[] = [];
  readonly #places = { trace: new Map<string, number>(), event: new Map<string, number>() };

  add(scope: Scope, key: string): void {
    if (this.#places[scope].has(key) || this.header.length > columnLimit) return;
    this.#places[scope].set(key, this.header.push(`${scope} ${key}`) - 1);
  }

  placeOf(scope: Scope, key: string): number {
    return this.#places[scope].get(key) ?? -1;
  }
}

/** Takes the keys that a log declares for all its traces or events. */
export type OnKey = (scope: Scope, key: string) => void;

/**
 * Reads the events of a log one by one (IEEE 1849-2016, section 4), each with the attributes of its trace.
 * Events that lie in no trace are read as well.
 */
export class EventLog implements XmlHandler {
  isDone = false;
  readonly #columns: EventColumns;
  readonly #onRow: OnRow;
  readonly #onKey: OnKey;
  readonly #row = new BuiltRow(() => this.#describe());
  #trace: XesAttribute[] = [];
  #event: XesAttribute[] = [];
  /** The scope of the globals, the trace or the event in hand, by the depth at which its attributes lie. */
  #scopes: (Scope | undefined)[] = [];
  #isGlobal = false;
  #line = 0;

  /** @param onKey told each key as it comes, declared or used, before the row that uses it */
  constructor(columns: EventColumns, onRow: OnRow, onKey: OnKey = () => undefined) {
    this.#columns = columns;
    this.#onRow = onRow;
    this.#onKey = onKey;
  }

  open(name: string, attributes: XmlAttributes, depth: number): void {
    if (valueTypes.has(name)) return this.#attribute(attributes, depth);
    if (name === 'trace' && depth === 1) this.#trace = [];
    else if (name === 'event' && depth <= 2) this.#event = [];
    else if (name === 'global' && depth === 1) return this.#openGlobal(attributes.scope);
    else return;
    this.#scopes[depth + 1] = name;
  }

  #openGlobal(scope: string | undefined): void {
    this.#isGlobal = true;
    this.#scopes[2] = scope === 'trace' || scope === 'event' ? scope : undefined;
  }

  #attribute({ key, value }: XmlAttributes, depth: number): void {
    const scope = this.#scopes[depth];
    if (scope === undefined || !key) return;
    this.#onKey(scope, key);
    if (this.#isGlobal) return;
    const list = scope === 'trace' ? this.#trace : this.#event;
    if (list.length <= columnLimit) list.push({ key, value: value ?? '' });
  }

  close(name: string, depth: number): void {
    if (name === 'event' && this.#scopes[depth + 1] === 'event') this.#closeEvent();
    else if (name === 'trace' && depth === 1) this.#trace = [];
    else if (name === 'global' && depth === 1) this.#isGlobal = false;
    else return;
    this.#scopes.length = depth + 1;
  }

  #closeEvent(): void {
    const row = this.#row;
    this.#line += 1;
    row.begin(this.#line);
    row.resize(this.#columns.header.length);
    this.#setCells('trace', this.#trace);
    this.#setCells('event', this.#event);
    if (this.#onRow(row) === false) this.isDone = true;
  }

  #setCells(scope: Scope, attributes: readonly XesAttribute[]): void {
    for (const { key, value } of attributes) {
      const place = this.#columns.placeOf(scope, key);
      if (place >= 0) this.#row.set(place, value);
    }
  }

  /** The event as one line: its own attributes, and before them those of its trace. */
  #describe(): string {
    const told = [...this.#trace, ...this.#event].map(({ key, value }) => `${key}=${value}`);
    const line = told.join('; ').replace(/\s+/g, ' ');
    return line.length > rawLength ? `${line.slice(0, rawLength)}…` : line;
  }
}
