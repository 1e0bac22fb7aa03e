import { PanelHeading } from '../../ui/heading.tsx';
import { Select, type Choice } from '../../ui/select.tsx';

type Words<Meaning extends string> = Partial<Record<Meaning, string[] | undefined>>;

const fold = (word: string): string => word.normalize('NFC').trim().toLowerCase();

/** What each word of a column means. Words that are not explained are in no list. */
export function WordMeanings<Meaning extends string>({
  title,
  words,
  value,
  meanings,
  unexplained,
  onChange,
}: {
  title: string;
  /** The words that the file uses; words of the plan that it does not use are kept. */
  words: readonly string[];
  value: Words<Meaning>;
  meanings: readonly { value: Meaning; label: string }[];
  /** What it means that a word is not explained. */
  unexplained: string;
  onChange: (value: Words<Meaning>) => void;
}) {
  if (words.length === 0) return null;
  const meaningOf = (word: string): Meaning | '' =>
    meanings.find(({ value: each }) => value[each]?.some((known) => fold(known) === fold(word)))
      ?.value ?? '';
  const choices: Choice[] = [{ value: '', label: unexplained }, ...meanings];
  const explain = (word: string, meaning: string) => {
    const others = meanings.map(
      ({ value: each }) =>
        [each, (value[each] ?? []).filter((known) => fold(known) !== fold(word))] as const,
    );
    const lists = others.map(
      ([each, list]) => [each, each === meaning ? [...list, word] : list] as const,
    );
    onChange(Object.fromEntries(lists.filter(([, list]) => list.length > 0)) as Words<Meaning>);
  };
  return (
    <section className="flex flex-col gap-3">
      <PanelHeading>{title}</PanelHeading>
      <div className="grid grid-cols-2 gap-3 lg:grid-cols-4">
        {words.map((word) => (
          <Select
            key={word}
            label={`“${word}”`}
            value={meaningOf(word)}
            choices={choices}
            onChange={(meaning) => explain(word, meaning)}
          />
        ))}
      </div>
    </section>
  );
}
