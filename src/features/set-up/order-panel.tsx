import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Button } from '../../ui/button.tsx';
import { standingOrder } from './area-order.ts';
import { setUpQuery } from './queries.ts';
import { SetUpForm } from './set-up-panel.tsx';

/** A button that opens the order of work as it stands, to be changed. */
export function OrderPanel({ siteId }: { siteId: number }) {
  const [isOpen, setOpen] = useState(false);
  const { data } = useQuery({ ...setUpQuery(siteId), enabled: isOpen });
  if (!isOpen || !data)
    return (
      <div className="no-print">
        <Button isDisabled={isOpen} onPress={() => setOpen(true)}>
          Change the order of work
        </Button>
      </div>
    );
  return (
    <SetUpForm
      siteId={siteId}
      order={standingOrder(data.areas)}
      title="The order of work"
      action="Keep this order"
      leave="Leave it as it is"
      onLeave={() => setOpen(false)}
      onKept={() => setOpen(false)}
    >
      The servers are those of the latest declaration; one that is changed here holds since ever.
    </SetUpForm>
  );
}
