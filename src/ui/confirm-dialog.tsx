import type { ReactNode } from 'react';
import { Dialog, DialogTrigger, Heading, Modal, ModalOverlay } from 'react-aria-components';
import { Button } from './button.tsx';

/** Asks once more before something that is hard to take back, saying what will happen. */
export function ConfirmDialog({
  trigger,
  title,
  action,
  onConfirm,
  children,
}: {
  trigger: string;
  title: string;
  action: string;
  onConfirm: () => void;
  children: ReactNode;
}) {
  return (
    <DialogTrigger>
      <Button kind="destructive">{trigger}</Button>
      <ModalOverlay
        isDismissable
        className="fixed inset-0 z-20 flex items-center justify-center bg-ink/40 p-4"
      >
        <Modal className="max-w-lg border-2 border-ink bg-panel p-6">
          <Dialog role="alertdialog" className="flex flex-col gap-4 outline-none">
            {({ close }) => (
              <>
                <Heading slot="title" className="font-serif text-sentence font-semibold">
                  {title}
                </Heading>
                <div>{children}</div>
                <div className="flex justify-end gap-3">
                  <Button onPress={close} autoFocus>
                    Leave it as it is
                  </Button>
                  <Button
                    kind="destructive"
                    onPress={() => {
                      close();
                      onConfirm();
                    }}
                  >
                    {action}
                  </Button>
                </div>
              </>
            )}
          </Dialog>
        </Modal>
      </ModalOverlay>
    </DialogTrigger>
  );
}
