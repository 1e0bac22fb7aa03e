/**
 * An export as an MES of a small plant might give it: semicolons, day first, local times, one open job,
 * and rows that cannot be taken. Made in the test, so that what is seen can be counted.
 */
export function plantExport(jobs: number): string {
  const areas = ['Sawing', 'Turning', 'Grinding'];
  const rows = Array.from({ length: jobs }, (_, job) =>
    areas.map((area, place) => {
      const started = Date.UTC(2026, 8, 28, 6) + (job * 2 + place * 9) * 3_600_000;
      const finished = started + (2 + ((job * 7 + place * 3) % 6)) * 3_600_000;
      const open = job === jobs - 1 && place === areas.length - 1;
      return [
        `PX-${String(job).padStart(4, '0')}`,
        area,
        stamp(started),
        open ? '' : stamp(finished),
      ].join(';');
    }),
  ).flat();
  return [
    'Order;Work centre;Start;End',
    ...rows,
    'PX-9001;Sawing;31.02.2026 08:00;',
    ';Turning;01.10.2026 08:00;01.10.2026 09:00',
    '',
  ].join('\r\n');
}

function stamp(at: number): string {
  const [day = '', time = ''] = new Date(at).toISOString().split('T');
  return `${day.split('-').reverse().join('.')} ${time.slice(0, 5)}`;
}
