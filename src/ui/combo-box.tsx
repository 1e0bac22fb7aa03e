import {
  Button,
  ComboBox as AriaComboBox,
  FieldError,
  Input,
  Label,
  ListBox,
  ListBoxItem,
  Popover,
} from 'react-aria-components';

/** One of many choices, found by typing a part of it. */
export function ComboBox({
  label,
  value,
  choices,
  onChange,
  error,
}: {
  label: string;
  value: string;
  choices: readonly string[];
  onChange: (value: string) => void;
  error?: string | undefined;
}) {
  return (
    <AriaComboBox
      defaultInputValue={value}
      defaultSelectedKey={value}
      onSelectionChange={(key) => {
        if (key !== null) onChange(String(key));
      }}
      isInvalid={error !== undefined}
      className="flex flex-col gap-1"
    >
      <Label className="text-soft">{label}</Label>
      <div className="flex">
        <Input className="min-w-0 flex-1 border border-soft bg-white px-2 py-1.5 text-ink" />
        <Button
          className="cursor-pointer border border-l-0 border-soft bg-white px-2"
          aria-label="Show the choices"
        >
          <svg width="10" height="6" viewBox="0 0 10 6" aria-hidden="true">
            <path d="M0 0l5 6 5-6z" fill="currentColor" />
          </svg>
        </Button>
      </div>
      <FieldError className="text-label text-over">{error}</FieldError>
      <Popover className="max-h-72 w-(--trigger-width) overflow-auto border border-ink bg-panel">
        <ListBox>
          {choices.map((choice) => (
            <ListBoxItem
              key={choice}
              id={choice}
              textValue={choice}
              className="cursor-pointer px-2 py-1 data-[focused]:bg-mist data-[selected]:font-bold"
            >
              {choice}
            </ListBoxItem>
          ))}
        </ListBox>
      </Popover>
    </AriaComboBox>
  );
}
