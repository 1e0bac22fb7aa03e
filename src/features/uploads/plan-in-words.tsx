import { eventKinds, timeColumns, type ColumnPlan } from '../../../shared/contracts/plan.ts';
import { listed } from '../../lib/format.ts';
import { columnLabels } from './column-selects.tsx';
import type { ColumnName } from './plan-draft.ts';
import { delimiterWords, encodingWords } from './reading-settings.tsx';

/** How a file was read, in words: the plan that its upload keeps. */
export function PlanInWords({ plan }: { plan: ColumnPlan }) {
  return (
    <details>
      <summary className="cursor-pointer text-soft">How it was read</summary>
      <ul className="mt-1 list-inside list-disc">
        {sentencesOf(plan).map((sentence) => (
          <li key={sentence}>{sentence}</li>
        ))}
      </ul>
    </details>
  );
}

const rowWords = { stay: 'a stay', event: 'an event', job: 'a job' } as const;

function sentencesOf(plan: ColumnPlan): string[] {
  const columns = Object.entries(plan.columns).map(
    ([name, header]) => `${columnLabels[name as ColumnName].toLowerCase()} from “${header}”`,
  );
  return [
    `A row tells ${rowWords[plan.shape]}: ${listed(columns)}.`,
    ...shapeSentences(plan),
    ...fileSentence(plan),
    `Times without an offset are of ${plan.timeZone}${timeWords(plan)}.`,
    ...(plan.unknownAreas === 'refuse' ? ['Rows of areas that are not known are refused.'] : []),
    ...(plan.mode === 'replace-period'
      ? ['It is the whole truth for its areas and its period.']
      : []),
  ];
}

function shapeSentences(plan: ColumnPlan): string[] {
  if (plan.shape === 'event') {
    const meanings = eventKinds.flatMap((kind) => {
      const words = plan.eventWords?.[kind] ?? [];
      return words.length > 0 ? [`${kind}: ${words.map((word) => `“${word}”`).join(', ')}`] : [];
    });
    return [`Words of events: ${meanings.join('; ')}.`];
  }
  if (plan.shape !== 'job') return [];
  return plan.areas.map(({ area, ...times }) => {
    const told = timeColumns.flatMap((column) =>
      times[column] ? [`${columnLabels[column].toLowerCase()} from “${times[column]}”`] : [],
    );
    return `${area}: ${listed(told)}.`;
  });
}

function fileSentence({ sheet, delimiter, encoding, headerLine, decimalSign }: ColumnPlan) {
  const parts = [
    ...(sheet ? [`sheet “${sheet}”`] : []),
    ...(encoding ? [encodingWords[encoding]] : []),
    ...(delimiter ? [`cut at each ${delimiterWords[delimiter]}`] : []),
    ...(headerLine !== undefined && headerLine > 1 ? [`header on line ${headerLine}`] : []),
    ...(decimalSign === ',' ? ['decimal comma'] : []),
  ];
  return parts.length > 0 ? [`The file: ${listed(parts)}.`] : [];
}

function timeWords({ timeFormat, dateOrder }: ColumnPlan): string {
  if (timeFormat !== 'auto') return `, written as ${timeFormat}`;
  if (!dateOrder) return '';
  return dateOrder === 'day-first' ? ', dates day first' : ', dates month first';
}
