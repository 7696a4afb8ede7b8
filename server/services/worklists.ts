import { countWorklist, listWorklist, type WorklistFilter } from '../../db/repositories/worklists.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import type { Worklist, WorklistQuery } from '../../shared/schemas/applications.ts';
import type { Actor, Deps, SignedInContext } from '../context.ts';
import { notAllowed } from '../errors.ts';
import { toApplicationRow } from './application-rows.ts';
import { listClockViews } from './clocks.ts';
import { getUtilitySettings } from './utility-settings.ts';

function toFilter({ id, role, organisationId }: Actor, query: WorklistQuery): WorklistFilter {
  const words = query.search?.split(/\s+/).filter(Boolean) ?? [];
  if (role === 'applicant') {
    if (organisationId === null) throw notAllowed();
    // Whom it is assigned to and what an unreleased run found would show in what is left of the list.
    return { organisationId, stage: query.stage, words };
  }
  const reviewerId = query.assigned === undefined ? undefined : query.assigned === 'mine' ? id : null;
  return { organisationId: null, stage: query.stage, reviewerId, isOutside: query.outside, words };
}

/** One page of the applications that the actor may see. */
export async function listApplications(
  deps: Deps,
  context: SignedInContext,
  query: WorklistQuery,
): Promise<Worklist> {
  const { page, pageSize, direction } = query;
  const filter = toFilter(context.actor, query);
  const utility = await getUtilitySettings(deps.db);
  // An applicant has no such column to sort by.
  const sort = query.sort === 'outside' && context.actor.role === 'applicant' ? 'number' : query.sort;
  const order = { sort, direction, limit: pageSize, offset: (page - 1) * pageSize };
  const rows = await listWorklist(deps.db, filter, order);
  const counts = await countWorklist(deps.db, filter, localDate(context.now, utility.timeZone));
  const clocks = await listClockViews(
    deps.db,
    context,
    rows.map(({ id }) => id),
  );
  return {
    rows: rows.map((row) => toApplicationRow(row, clocks.get(row.id) ?? [], context.actor, utility)),
    ...counts,
    page,
    pageSize,
  };
}
