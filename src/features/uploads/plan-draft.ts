import {
  columnPlanSchema,
  optionalColumns,
  timeColumns,
  type AreaColumns,
  type ColumnPlan,
  type EventWords,
  type OptionalColumn,
  type Shape,
  type TimeColumn,
} from '../../../shared/contracts/plan.ts';

export type ColumnName = 'job' | 'area' | 'event' | 'time' | TimeColumn | OptionalColumn;

type Settings = Omit<ColumnPlan, 'shape' | 'columns'>;

/** A plan in the making: what a shape needs may still be missing, and what another needs is kept beside it. */
export interface PlanDraft extends Settings {
  shape: Shape;
  columns: Partial<Record<ColumnName, string>>;
  eventWords?: EventWords | undefined;
  areas?: Partial<AreaColumns>[] | undefined;
}

export const emptyDraft = (timeZone: string): PlanDraft => ({
  shape: 'stay',
  columns: {},
  timeZone,
  timeFormat: 'auto',
  unknownAreas: 'add',
  mode: 'merge',
});

export const draftOf = (plan: ColumnPlan): PlanDraft => ({ ...plan });

/** The columns that a shape has of its own, beside those that any row may have. */
export const columnsOfShape: Readonly<Record<Shape, readonly ColumnName[]>> = {
  stay: ['job', 'area', ...timeColumns],
  event: ['job', 'area', 'event', 'time'],
  job: ['job'],
};

/** The plan that a draft makes, or null while something that its shape needs is missing. */
export function planOf(draft: PlanDraft): ColumnPlan | null {
  const { eventWords, areas, columns, ...settings } = draft;
  const known: readonly string[] = [...columnsOfShape[draft.shape], ...optionalColumns];
  const kept = Object.entries(columns).filter(([name]) => known.includes(name));
  const checked = columnPlanSchema.safeParse({
    ...settings,
    columns: Object.fromEntries(kept),
    ...(draft.shape === 'event' && holdsAny(eventWords) ? { eventWords } : {}),
    ...(draft.shape === 'job' ? { areas: areas ?? [] } : {}),
  });
  return checked.success ? checked.data : null;
}

const holdsAny = (words: EventWords | undefined): boolean =>
  words !== undefined && Object.values(words).some((list) => list.length > 0);

/** What a draft still lacks, as a sentence. */
export const whatIsMissing: Readonly<Record<Shape, string>> = {
  stay: 'Name the columns of the job, of the area, and of at least one time.',
  event: 'Name the columns of the job, of the area, of the event and of its time.',
  job: 'Name the column of the job, and for at least one area a column of a time.',
};

/**
 * The plan as it is saved for the next file of its kind: without what the file itself tells, unless the
 * person chose it otherwise than it was guessed.
 */
export function planToSave(plan: ColumnPlan, guess: ColumnPlan | null): ColumnPlan {
  const saved = { ...plan };
  for (const key of ['headerLine', 'encoding', 'delimiter', 'sheet'] as const) {
    if (saved[key] === guess?.[key]) delete saved[key];
  }
  return saved;
}
