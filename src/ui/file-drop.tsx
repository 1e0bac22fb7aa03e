import { DropZone, FileTrigger, Text } from 'react-aria-components';
import { Button } from './button.tsx';

/** A place to drop a file on, or to choose one by keyboard. */
export function FileDrop({
  label,
  hint,
  onFile,
}: {
  label: string;
  hint: string;
  onFile: (file: File) => void;
}) {
  return (
    <DropZone
      onDrop={(event) => {
        const item = event.items.find((each) => each.kind === 'file');
        if (item?.kind === 'file') void item.getFile().then(onFile);
      }}
      className="flex flex-col items-start gap-3 border-2 border-dashed border-soft bg-panel p-6 data-[drop-target]:border-water data-[drop-target]:bg-mist"
    >
      <Text slot="label" className="font-serif text-sentence">
        {label}
      </Text>
      <span className="text-soft">{hint}</span>
      <FileTrigger
        onSelect={(files) => {
          const [file] = files ?? [];
          if (file) onFile(file);
        }}
      >
        <Button kind="main">Choose a file</Button>
      </FileTrigger>
    </DropZone>
  );
}
