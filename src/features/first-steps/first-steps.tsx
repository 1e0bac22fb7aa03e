import { Link } from 'react-router-dom';

/** Three plain steps from an empty site to own figures, with a sample to try. */
export function FirstSteps({
  intakePath,
  mayUpload,
  isBusy,
}: {
  intakePath: string;
  mayUpload: boolean;
  /** An upload is on its way into the figures. */
  isBusy: boolean;
}) {
  const steps = [
    {
      title: 'Get an export',
      text: (
        <>
          From your MES or job-tracking system, as CSV, XLSX or XES: a row for each stay of a job at
          an area, for each event, or for each job, with the job, the area, and when it started and
          finished there. The arrival helps where it is recorded. To try it first, take{' '}
          <a href="/samples/depot-two-weeks.csv" download>
            a sample of two weeks
          </a>
          .
        </>
      ),
    },
    {
      title: 'Drop it on Intake',
      text: mayUpload ? (
        <>
          Its first rows are shown as they will be read, and you say what each column means:{' '}
          <Link to={intakePath}>open Intake</Link>.
        </>
      ) : (
        'An analyst or an admin of your organisation does this.'
      ),
    },
    {
      title: 'Read the Floor',
      text: isBusy
        ? 'An upload is being worked in. This screen shows the areas as soon as that is done.'
        : 'This screen then shows what is where, how fast it moves, and what has gathered.',
    },
  ];
  return (
    <section aria-label="First steps" className="flex max-w-4xl flex-col gap-4">
      <p className="font-serif text-sentence">There are no data yet. Three steps lead to them.</p>
      <ol className="flex flex-col gap-4">
        {steps.map(({ title, text }, index) => (
          <li key={title} className="flex gap-4 border-l-4 border-hair py-1 pl-4">
            <span aria-hidden="true" className="text-figure text-soft">
              {index + 1}
            </span>
            <div>
              <h2 className="text-lead font-bold">{title}</h2>
              <p className="max-w-prose">{text}</p>
            </div>
          </li>
        ))}
      </ol>
    </section>
  );
}
