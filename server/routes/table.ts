import type { RouteDefinition } from '../route-definition.ts';
import { applicationRoutes } from './applications.ts';
import { auditRoutes } from './audit.ts';
import { decisionRoutes } from './decisions.ts';
import { draftRoutes } from './drafts.ts';
import { equipmentRoutes } from './equipment.ts';
import { eventRoutes } from './events.ts';
import { fileRoutes } from './files.ts';
import { healthRoutes } from './health.ts';
import { mailboxRoutes } from './mailbox.ts';
import { modelRoutes } from './models.ts';
import { moveRoutes } from './moves.ts';
import { peopleRoutes } from './people.ts';
import { preApplicationReportRoutes } from './pre-application-reports.ts';
import { reviewRoutes } from './reviews.ts';
import { roomRoutes } from './rooms.ts';
import { ruleSetRoutes } from './rule-sets.ts';
import { runRoutes } from './runs.ts';
import { sessionRoutes } from './sessions.ts';
import { sheetRoutes } from './sheets.ts';
import { stuckWorkRoutes } from './stuck-work.ts';
import { submissionRoutes } from './submissions.ts';
import { territoryRoutes } from './territory.ts';
import { trialRoutes } from './trials.ts';
import { withdrawalRoutes } from './withdrawals.ts';

/** Every route there is under /api. */
export const allRoutes: readonly RouteDefinition[] = [
  ...sessionRoutes,
  ...healthRoutes,
  ...peopleRoutes,
  ...applicationRoutes,
  ...draftRoutes,
  ...submissionRoutes,
  ...withdrawalRoutes,
  ...reviewRoutes,
  ...decisionRoutes,
  ...moveRoutes,
  ...runRoutes,
  ...trialRoutes,
  ...sheetRoutes,
  ...stuckWorkRoutes,
  ...auditRoutes,
  ...fileRoutes,
  ...preApplicationReportRoutes,
  ...territoryRoutes,
  ...equipmentRoutes,
  ...modelRoutes,
  ...roomRoutes,
  ...ruleSetRoutes,
  ...eventRoutes,
  ...mailboxRoutes,
];
