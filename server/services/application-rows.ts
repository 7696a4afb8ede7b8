import type { WorklistRow } from '../../db/repositories/worklists.ts';
import type { ApplicationRow, ClockView } from '../../shared/schemas/applications.ts';
import type { Actor } from '../context.ts';
import { findCurrentClock } from './clocks.ts';
import { writeReference, type UtilitySettings } from './utility-settings.ts';

/** Applicants read that the utility did it, not who of its people. */
export const utilityActor = 'the utility';

/** A row as its reader may see it: who reviews and what an unreleased run found stays with the utility. */
export function toApplicationRow(
  row: WorklistRow,
  clocks: ClockView[],
  reader: Actor,
  utility: UtilitySettings,
): ApplicationRow {
  const isStaff = reader.role !== 'applicant';
  const { reviewerPublicId: publicId, reviewerName: name } = row;
  return {
    publicId: row.publicId,
    reference: writeReference(utility, row.number),
    name: row.name,
    organisation: row.organisation,
    place: row.place,
    circuit: row.circuit,
    kind: row.kind,
    sizeKw: row.sizeKw,
    stage: row.stage,
    waitingOn: row.waitingOn,
    reviewer: isStaff && publicId !== null && name !== null ? { publicId, name } : null,
    receivedOn: row.receivedOn,
    clock: findCurrentClock(clocks),
    outsideCount: isStaff ? row.outsideCount : null,
    needsDataCount: isStaff ? row.needsDataCount : null,
    updatedAt: row.updatedAt.toISOString(),
  };
}
