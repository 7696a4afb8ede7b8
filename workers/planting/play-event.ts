import type { DemoApplication, DemoEvent } from '../../db/seeds/demo/applications.ts';
import type { Deps, SignedInContext } from '../../server/context.ts';
import { getApplicationView } from '../../server/services/applications.ts';
import { decide } from '../../server/services/decisions.ts';
import { getDraft, saveSection, startApplication } from '../../server/services/drafts.ts';
import { recordMove } from '../../server/services/moves.ts';
import { askForMissing, changeReviewer, confirmComplete } from '../../server/services/reviews.ts';
import { screenAgain } from '../../server/services/runs.ts';
import { getActorByEmail } from '../../server/services/sessions.ts';
import { submitApplication } from '../../server/services/submissions.ts';
import { waiveFinding } from '../../server/services/waivers.ts';
import { withdraw } from '../../server/services/withdrawals.ts';
import { answerSections, type Answers } from '../../shared/schemas/answers.ts';
import type { ApplicationView, DecisionKind } from '../../shared/schemas/applications.ts';

export interface Play {
  deps: Deps;
  /** Public id of each application by its name in the scenario. */
  publicIds: Map<string, string>;
  /** Public id of an equipment record by its code in the scenario. */
  publicIdOf(code: string): string;
  /** Screens what waits, at that time. */
  screenWaiting(at: Date): Promise<void>;
}

interface Scene {
  application: DemoApplication;
  answers: Answers;
  event: DemoEvent;
  at: Date;
}

const setAside =
  'Answered outside the screening: the engineer of record looked at this place on the feeder and found it acceptable.';

async function makeContext({ deps }: Play, email: string, now: Date): Promise<SignedInContext> {
  return { actor: await getActorByEmail(deps.db, email), now, ip: '127.0.0.1', requestId: 'demo' };
}

async function begin(play: Play, context: SignedInContext, { application, answers }: Scene): Promise<void> {
  const { deps } = play;
  let draft = await startApplication(deps, context);
  play.publicIds.set(application.name, draft.applicationId);
  for (const section of answerSections) {
    if (answers[section] === undefined) continue;
    const body = { version: draft.version, answers: answers[section] };
    draft = await saveSection(deps, context, draft.applicationId, section, body);
  }
}

async function handIn(play: Play, context: SignedInContext, id: string): Promise<void> {
  const { version } = await getDraft(play.deps, context, id);
  await submitApplication(play.deps, context, id, { version, attestedBy: context.actor.name, agrees: true });
}

/** An approval of the demo sets aside what stands open, as a reviewer would who had answered it another way. */
async function setOpenFindingsAside(
  play: Play,
  context: SignedInContext,
  view: ApplicationView,
): Promise<void> {
  for (const finding of view.run?.findings ?? []) {
    if (finding.verdict === 'within' || finding.verdict === 'not-applicable') continue;
    const body = { question: finding.id, element: finding.element, reason: setAside };
    await waiveFinding(play.deps, context, view.run?.publicId ?? '', body);
  }
}

async function settle(
  play: Play,
  context: SignedInContext,
  id: string,
  kind: DecisionKind,
  scene: Scene,
): Promise<void> {
  const { deps } = play;
  // A run that a decision rests on is history: a second decision, after a study, rests on a run of its own.
  if ((await getApplicationView(deps, context, id)).decision !== null) {
    await screenAgain(deps, context, id);
    await play.screenWaiting(scene.at);
  }
  const view = await getApplicationView(deps, context, id);
  if (kind === 'approve') await setOpenFindingsAside(play, context, view);
  await decide(deps, context, id, {
    version: view.version,
    kind,
    runId: view.run?.publicId ?? '',
    reason: scene.event.note ?? 'As discussed with the applicant.',
    conditions: kind === 'approve' ? (scene.application.conditions ?? undefined) : undefined,
  });
}

/** Who reviews it takes it before their first act. */
async function takeOn(play: Play, context: SignedInContext, id: string): Promise<number> {
  const view = await getApplicationView(play.deps, context, id);
  if (view.reviewer?.publicId === context.actor.publicId) return view.version;
  return (await changeReviewer(play.deps, context, id, { version: view.version, reviewer: 'me' })).version;
}

const decisionOf: Partial<Record<DemoEvent['event'], DecisionKind>> = {
  approve: 'approve',
  'require-study': 'require-study',
  deny: 'deny',
};

/** Does one thing that the scenario tells, as the person who did it, at the time it happened. */
export async function playEvent(play: Play, scene: Scene): Promise<void> {
  const { deps } = play;
  const { application, event, at } = scene;
  const context = await makeContext(play, event.byEmail, at);
  if (event.event === 'start') return begin(play, context, scene);
  const id = play.publicIds.get(application.name);
  if (id === undefined)
    throw new Error(`${application.name}: got ${event.event}, expected it to have been started`);
  if (event.event === 'submit' || event.event === 'resubmit') return handIn(play, context, id);
  if (event.event === 'withdraw') {
    const { version } = await getApplicationView(deps, context, id);
    await withdraw(deps, context, id, { version, reason: event.note ?? 'The project is not going ahead.' });
    return;
  }
  const version = await takeOn(play, context, id);
  const kind = decisionOf[event.event];
  if (kind !== undefined) return settle(play, context, id, kind, scene);
  if (event.event === 'confirm-complete') await confirmComplete(deps, context, id, { version });
  else if (event.event === 'ask-for-missing')
    await askForMissing(deps, context, id, { version, items: application.missing });
  else await recordMove(deps, context, id, { version, event: event.event, note: event.note ?? 'Recorded.' });
}
