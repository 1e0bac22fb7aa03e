import type { ReactNode } from 'react';
import { Dialog, DialogTrigger, Heading, Modal, ModalOverlay } from 'react-aria-components';
import { Button } from './button.tsx';

/** A button that opens a form over the screen; what is in it closes it when it is done. */
export function FormDialog({
  trigger,
  of,
  title,
  children,
}: {
  trigger: string;
  /** What the trigger is about, for those who hear it without its row. */
  of?: string;
  title: string;
  children: (close: () => void) => ReactNode;
}) {
  return (
    <DialogTrigger>
      <Button aria-label={of === undefined ? trigger : `${trigger} ${of}`}>{trigger}</Button>
      <ModalOverlay
        isDismissable
        className="fixed inset-0 z-20 flex items-center justify-center bg-ink/40 p-4"
      >
        <Modal className="max-h-full w-full max-w-lg overflow-y-auto border-2 border-ink bg-panel p-6">
          <Dialog className="flex flex-col gap-4 outline-none">
            {({ close }) => (
              <>
                <Heading slot="title" className="font-serif text-sentence font-semibold">
                  {title}
                </Heading>
                {children(close)}
              </>
            )}
          </Dialog>
        </Modal>
      </ModalOverlay>
    </DialogTrigger>
  );
}
