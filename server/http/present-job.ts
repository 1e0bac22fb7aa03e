import type { z } from 'zod';
import type { JobRecord, readJob } from '../../shared/contracts/jobs.ts';
import type { RecordRow, StayRow, ToldRow, VoidedRow } from '../flow/job-path.ts';
import { versionsOf } from '../flow/record-versions.ts';

type JobAnswer = z.input<typeof readJob.response>;

const iso = (date: Date | null) => date?.toISOString() ?? null;

export function presentJob(
  jobKey: string,
  records: readonly RecordRow[],
  told: readonly ToldRow[],
  stays: readonly StayRow[],
  voided: readonly VoidedRow[],
): JobAnswer {
  return {
    jobKey,
    records: records.map((record) => presentRecord(record, told)),
    stays: stays.map((stay) => ({
      zoneId: stay.zone_id,
      zoneName: stay.zone_name,
      kind: stay.kind,
      entered: stay.entered.toISOString(),
      started: iso(stay.started),
      left: iso(stay.left_at),
      queueSeconds: stay.queue_seconds,
      processSeconds: stay.process_seconds,
      flowSeconds: stay.flow_seconds,
    })),
    voided: voided.map((row) => ({
      uploadId: row.upload_id,
      fileName: row.file_name,
      line: row.line,
      areaName: row.area_name,
      arrived: iso(row.arrived),
      started: iso(row.started),
      finished: iso(row.finished),
      voidedBy: row.voided_by,
    })),
  };
}

function presentRecord(record: RecordRow, told: readonly ToldRow[]): JobRecord {
  return {
    areaId: record.area_id,
    areaName: record.area_name,
    pass: record.pass,
    entered: iso(record.entered),
    arrived: iso(record.arrived),
    started: iso(record.started),
    finished: iso(record.finished),
    left: iso(record.left_at),
    finishInferred: record.finish_inferred,
    ending: record.ending,
    queueSeconds: record.queue_seconds,
    processSeconds: record.process_seconds,
    flowSeconds: record.flow_seconds,
    quantity: record.quantity,
    told: toldBeside(record),
    record: { uploadId: record.upload_id, line: record.line },
    versions: versionsOf(record, told).map(({ row, outcome }) => ({
      uploadId: row.upload_id,
      fileName: row.file_name,
      line: row.line,
      event: row.event,
      outcome,
      arrived: iso(row.arrived),
      started: iso(row.started),
      finished: iso(row.finished),
    })),
  };
}

/** What the record says beside job, area and times, by column of the plan; only what it does say. */
function toldBeside(record: RecordRow): Record<string, string> {
  const columns = {
    record: record.record_key,
    family: record.family,
    due: iso(record.due),
    priority: record.priority,
    workContent: record.work_content,
    value: record.value,
    resource: record.resource,
    status: record.status,
    parent: record.parent,
  };
  return Object.fromEntries(
    Object.entries(columns).flatMap(([name, value]) =>
      value === null ? [] : [[name, String(value)]],
    ),
  );
}
