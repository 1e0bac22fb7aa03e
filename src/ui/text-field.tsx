import {
  FieldError,
  Input,
  Label,
  Text,
  TextField as AriaTextField,
  type TextFieldProps as AriaProps,
} from 'react-aria-components';

export interface TextFieldProps extends Omit<AriaProps, 'className' | 'children'> {
  label: string;
  hint?: string;
  error?: string | undefined;
  placeholder?: string;
}

export function TextField({ label, hint, error, placeholder, ...props }: TextFieldProps) {
  return (
    <AriaTextField {...props} isInvalid={error !== undefined} className="flex flex-col gap-1">
      <Label className="text-soft">{label}</Label>
      <Input
        placeholder={placeholder ?? ''}
        className="border border-soft bg-white px-2 py-1.5 text-ink data-[invalid]:border-over"
      />
      {hint ? (
        <Text slot="description" className="text-label text-soft">
          {hint}
        </Text>
      ) : null}
      <FieldError className="text-label text-over">{error}</FieldError>
    </AriaTextField>
  );
}
