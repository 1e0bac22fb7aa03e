import { Link } from 'react-router-dom';
import type { TrustNotice } from '../../../shared/contracts/trust.ts';
import { PanelHeading } from '../../ui/heading.tsx';
import { Notice } from '../../ui/notice.tsx';

/** What is wrong with the data as a whole, and what to do about it. */
export function TrustNotices({
  notices,
  areas,
  linkTo,
}: {
  notices: readonly TrustNotice[];
  areas: readonly { id: number; name: string }[];
  linkTo: (zoneId: number) => string;
}) {
  if (notices.length === 0) return null;
  return (
    <section id="notices" aria-label="About the data as a whole" className="flex flex-col gap-2">
      <PanelHeading>About the data as a whole</PanelHeading>
      {notices.map((notice) => (
        <Notice key={notice.text} kind="warning">
          {notice.text}
          <p className="mt-1">
            <span className="font-bold">What to do:</span> {notice.advice}
          </p>
          {notice.zoneIds.length > 0 ? (
            <p className="mt-1 flex gap-4">
              {notice.zoneIds.map((id) => (
                <Link key={id} to={linkTo(id)}>
                  {areas.find((area) => area.id === id)?.name}
                </Link>
              ))}
            </p>
          ) : null}
        </Notice>
      ))}
    </section>
  );
}
