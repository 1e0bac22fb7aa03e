import { Button as AriaButton, type ButtonProps as AriaProps } from 'react-aria-components';

export interface ButtonProps extends Omit<AriaProps, 'className'> {
  kind?: 'plain' | 'main' | 'destructive';
}

const looks = {
  plain: 'border-ink text-ink hover:bg-mist',
  main: 'border-ink bg-ink text-panel hover:bg-water hover:border-water',
  destructive: 'border-over text-over hover:bg-over hover:text-panel',
};

/** Says what happens when it is pressed. */
export function Button({ kind = 'plain', ...props }: ButtonProps) {
  return (
    <AriaButton
      {...props}
      className={`inline-flex cursor-pointer items-center gap-2 border px-3 py-1.5 font-medium pressed:translate-y-px data-[disabled]:cursor-not-allowed data-[disabled]:border-hair data-[disabled]:bg-transparent data-[disabled]:text-soft ${looks[kind]}`}
    />
  );
}
