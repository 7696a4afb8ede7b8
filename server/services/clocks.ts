import type { Database, Transaction } from '../../db/connection.ts';
import {
  closePause,
  insertClock,
  listClocks,
  moveDueDate,
  openPause,
  stopClock,
  type Clock,
} from '../../db/repositories/clocks.ts';
import type { Application } from '../../db/repositories/applications.ts';
import { getRuleSetVersion, getValidRuleSet } from '../../db/repositories/rule-sets.ts';
import type { ApplicationEvent, Stage } from '../../shared/rules/application-life.ts';
import {
  addBusinessDays,
  addCalendarDays,
  countBusinessDays,
  countCalendarDays,
  localDate,
} from '../../shared/rules/business-days.ts';
import {
  clockKinds,
  clockOfStage,
  type ClockKind,
  type ClockKindKey,
} from '../../shared/rules/clock-kinds.ts';
import { getClockRule } from '../../shared/rules/rule-terms.ts';
import type { ClockView } from '../../shared/schemas/applications.ts';
import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { Context } from '../context.ts';
import { getCalendarInForce, listHolidays } from './holidays.ts';
import { getUtilitySettings } from './utility-settings.ts';

type Holidays = ReadonlySet<string>;
type Clocked = Pick<Application, 'id' | 'ruleSetVersionId'>;

const kindsByKey = new Map<string, ClockKind>(Object.entries(clockKinds));

function isPaused(clock: Clock): boolean {
  return clock.pauses.some((pause) => pause.toOn === null);
}

/** The days after `from` up to `to`, of the kind that the clock counts. */
function countDays({ unit }: Pick<Clock, 'unit'>, from: string, to: string, holidays: Holidays): number {
  return unit === 'calendar-day' ? countCalendarDays(from, to) : countBusinessDays(from, to, holidays);
}

function addDays({ unit }: Pick<Clock, 'unit'>, from: string, days: number, holidays: Holidays): string {
  return unit === 'calendar-day' ? addCalendarDays(from, days) : addBusinessDays(from, days, holidays);
}

/** Days until `today`, without those on which the ball was in the other court. */
function countUsedDays(clock: Clock, today: string, holidays: Holidays): number {
  const paused = clock.pauses.reduce(
    (sum, { fromOn, toOn }) => sum + countDays(clock, fromOn, toOn ?? today, holidays),
    0,
  );
  return Math.max(0, countDays(clock, clock.startedOn, today, holidays) - paused);
}

function toClockView(clock: Clock, today: string, holidays: Holidays, timeZone: string): ClockView {
  const lastDay = clock.stoppedAt === null ? today : localDate(clock.stoppedAt, timeZone);
  const running = today > clock.dueOn ? 'overdue' : 'running';
  return {
    kind: clock.kind,
    label: kindsByKey.get(clock.kind)?.label ?? clock.kind,
    unit: clock.unit,
    allowedDays: clock.allowedDays,
    usedDays: countUsedDays(clock, lastDay, holidays),
    startedOn: clock.startedOn,
    dueOn: clock.dueOn,
    state: clock.stoppedAt !== null ? 'stopped' : isPaused(clock) ? 'paused' : running,
  };
}

/** The clocks of all these applications by their row id, each one's from the first to the newest. */
export async function listClockViews(
  db: Database,
  context: Pick<Context, 'now'>,
  applicationIds: readonly number[],
): Promise<Map<number, ClockView[]>> {
  const clocks = await listClocks(db, applicationIds);
  const holidays = await listHolidays(
    db,
    clocks.map((clock) => clock.calendarId),
  );
  const { timeZone } = await getUtilitySettings(db);
  const today = localDate(context.now, timeZone);
  const views = new Map<number, ClockView[]>(applicationIds.map((id) => [id, []]));
  for (const clock of clocks) {
    const kept = holidays.get(clock.calendarId) ?? new Set<string>();
    views.get(clock.applicationId)?.push(toClockView(clock, today, kept, timeZone));
  }
  return views;
}

/** The clock that the strip of an application shows: the one that runs, else the one that stands still. */
export function findCurrentClock(clocks: readonly ClockView[]): ClockView | null {
  const having = (...states: ClockView['state'][]) => clocks.find((clock) => states.includes(clock.state));
  return having('running', 'overdue') ?? having('paused') ?? null;
}

/**
 * The clock goes on, and every day of the pause that it counts comes on top of what it had left. A limit that had passed
 * before the pause stays passed.
 */
async function resumeClock(trx: Transaction, clock: Clock, today: string): Promise<void> {
  const pause = clock.pauses.find((candidate) => candidate.toOn === null);
  if (pause === undefined) return;
  await closePause(trx, clock.id, today);
  if (clock.dueOn < pause.fromOn) return;
  const holidays = (await listHolidays(trx, [clock.calendarId])).get(clock.calendarId) ?? new Set<string>();
  const pausedDays = countDays(clock, pause.fromOn, today, holidays);
  await moveDueDate(trx, clock.id, addDays(clock, clock.dueOn, pausedDays, holidays));
}

/** The rules that bind the application; before it is bound, those of the day. */
async function getRules(trx: Transaction, { ruleSetVersionId }: Clocked, today: string): Promise<RuleSet> {
  const version =
    ruleSetVersionId === null ? getValidRuleSet(trx, today) : getRuleSetVersion(trx, ruleSetVersionId);
  return (await version).content;
}

async function startClock(trx: Transaction, application: Clocked, kind: ClockKindKey, today: string) {
  const calendar = await getCalendarInForce(trx);
  const { allowedDays, unit } = getClockRule(await getRules(trx, application, today), kind);
  await insertClock(trx, {
    applicationId: application.id,
    kind,
    unit,
    allowedDays,
    calendarId: calendar.id,
    startedOn: today,
    dueOn: addDays({ unit }, today, allowedDays, new Set(calendar.days)),
  });
}

/** The one that waits for the applicant's answer instead of ending with the stage. */
const heldClock = 'completeness';

/**
 * What a transition does to the clocks: the stage's own starts, those before it stop; the check for completeness
 * only stands still while the applicant looks for what is missing. Gives the date that is due next, or null.
 */
export async function turnClocks(
  trx: Transaction,
  context: Pick<Context, 'now'>,
  application: Clocked,
  event: ApplicationEvent,
  toStage: Stage,
): Promise<string | null> {
  const { timeZone } = await getUtilitySettings(trx);
  const today = localDate(context.now, timeZone);
  const open = (await listClocks(trx, [application.id])).filter((clock) => clock.stoppedAt === null);
  const held = open.find((clock) => clock.kind === heldClock);
  const isHolding = event === 'ask-for-missing' || event === 'resubmit';
  for (const clock of open) {
    if (isHolding && clock === held) continue;
    await closePause(trx, clock.id, today);
    await stopClock(trx, clock.id, context.now);
  }
  if (event === 'ask-for-missing' && held !== undefined) await openPause(trx, held.id, today);
  const isResumed = event === 'resubmit' && held !== undefined;
  if (isResumed) await resumeClock(trx, held, today);
  const started = clockOfStage[toStage];
  if (started !== undefined && !isResumed) await startClock(trx, application, started, today);
  return findNextDueDate(await listClocks(trx, [application.id]));
}

function findNextDueDate(clocks: readonly Clock[]): string | null {
  const running = clocks.filter((clock) => clock.stoppedAt === null && !isPaused(clock));
  return running.map((clock) => clock.dueOn).sort()[0] ?? null;
}

/** When the clock of this kind that runs is due; for mail, in the transaction that started it. */
export async function getDueDate(
  trx: Transaction,
  applicationId: number,
  kind: ClockKindKey,
): Promise<string> {
  const clock = (await listClocks(trx, [applicationId])).findLast((candidate) => candidate.kind === kind);
  if (clock === undefined) throw new Error(`Application row ${applicationId} has no clock "${kind}"`);
  return clock.dueOn;
}
