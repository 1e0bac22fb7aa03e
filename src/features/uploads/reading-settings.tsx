import {
  dateOrders,
  delimiters,
  encodings,
  type Delimiter,
  type Encoding,
} from '../../../shared/contracts/plan.ts';
import type { UploadPreview } from '../../../shared/contracts/uploads.ts';
import { ComboBox } from '../../ui/combo-box.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { Notice } from '../../ui/notice.tsx';
import { Select, type Choice } from '../../ui/select.tsx';
import { TextField } from '../../ui/text-field.tsx';
import type { PlanDraft } from './plan-draft.ts';

const zones = Intl.supportedValuesOf('timeZone');
const detected = { value: '', label: 'as detected' };

export const delimiterWords: Readonly<Record<Delimiter, string>> = {
  ',': 'comma',
  ';': 'semicolon',
  '\t': 'tab',
  '|': 'pipe',
};
export const encodingWords: Readonly<Record<Encoding, string>> = {
  'utf-8': 'UTF-8',
  'utf-16le': 'UTF-16, little end first',
  'utf-16be': 'UTF-16, big end first',
  'windows-1252': 'Windows-1252',
};
const orderWords = { 'day-first': 'day first', 'month-first': 'month first' } as const;

type Key = 'delimiter' | 'encoding' | 'sheet' | 'dateOrder' | 'decimalSign';

/** How the file and its times are read; what is left as detected is told by the file. */
export function ReadingSettings({
  preview,
  draft,
  onChange,
}: {
  preview: UploadPreview;
  draft: PlanDraft;
  onChange: (draft: PlanDraft) => void;
}) {
  const set = (key: Key, value: string) => {
    const { [key]: _, ...others } = draft;
    onChange(value === '' ? others : { ...others, [key]: value });
  };
  const choice = (key: Key, label: string, choices: readonly Choice[]) => (
    <Select
      key={key}
      label={label}
      value={draft[key] ?? ''}
      choices={[detected, ...choices]}
      onChange={(value) => set(key, value)}
    />
  );
  const orders = dateOrders.map((value) => ({ value, label: orderWords[value] }));
  return (
    <section className="flex flex-col gap-3">
      <PanelHeading>How it is read</PanelHeading>
      {preview.dateOrder === 'unknown' ? (
        <Notice kind="warning">
          The first dates can be read day first or month first; the rows are shown day first. Say
          below which it is; otherwise the whole file is asked, and where that does not tell, the
          reading stops.
        </Notice>
      ) : null}
      <div className="grid gap-3 sm:grid-cols-2 lg:grid-cols-3">
        <ComboBox
          key={draft.timeZone}
          label="Time zone of times without an offset"
          value={draft.timeZone}
          choices={zones}
          onChange={(timeZone) => onChange({ ...draft, timeZone })}
        />
        <TextField
          label="Time format"
          hint="auto, or a pattern such as dd.MM.yyyy HH:mm"
          value={draft.timeFormat}
          onChange={(timeFormat) => onChange({ ...draft, timeFormat })}
        />
        {choice('dateOrder', 'Order of day and month', orders)}
        <Select
          label="Areas that are not known yet"
          value={draft.unknownAreas}
          choices={[
            { value: 'add', label: 'add them' },
            { value: 'refuse', label: 'refuse their rows' },
          ]}
          onChange={(value) =>
            onChange({ ...draft, unknownAreas: value === 'refuse' ? 'refuse' : 'add' })
          }
        />
        <Select
          label="Beside what was loaded before"
          hint="A file that is the whole truth voids rows of before that it does not carry."
          value={draft.mode}
          choices={[
            { value: 'merge', label: 'add, complete and correct' },
            { value: 'replace-period', label: 'the whole truth for its areas and period' },
          ]}
          onChange={(value) =>
            onChange({ ...draft, mode: value === 'merge' ? 'merge' : 'replace-period' })
          }
        />
      </div>
      <details>
        <summary className="cursor-pointer">The file itself</summary>
        <div className="mt-3 grid grid-cols-2 gap-3 lg:grid-cols-5">
          {preview.sheets.length > 0
            ? choice(
                'sheet',
                'Sheet',
                preview.sheets.map((value) => ({ value, label: value })),
              )
            : null}
          {preview.fileKind === 'text'
            ? [
                choice(
                  'delimiter',
                  'Delimiter',
                  delimiters.map((value) => ({ value, label: delimiterWords[value] })),
                ),
                choice(
                  'encoding',
                  'Encoding',
                  encodings.map((value) => ({ value, label: encodingWords[value] })),
                ),
              ]
            : null}
          {choice('decimalSign', 'Decimal sign', [
            { value: '.', label: 'point: 1.5' },
            { value: ',', label: 'comma: 1,5' },
          ])}
          {preview.fileKind === 'xes' ? null : (
            <HeaderLineField draft={draft} onChange={onChange} />
          )}
        </div>
      </details>
    </section>
  );
}

function HeaderLineField({
  draft,
  onChange,
}: {
  draft: PlanDraft;
  onChange: (draft: PlanDraft) => void;
}) {
  return (
    <TextField
      label="Line of the header"
      hint="0 where there is none"
      inputMode="numeric"
      value={draft.headerLine === undefined ? '' : String(draft.headerLine)}
      onChange={(text) => {
        const { headerLine: _, ...others } = draft;
        const line = Number(text);
        const isLine = text.trim() !== '' && Number.isInteger(line) && line >= 0;
        onChange(isLine ? { ...others, headerLine: line } : others);
      }}
    />
  );
}
