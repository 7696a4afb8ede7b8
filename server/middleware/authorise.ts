import type { RequestHandler } from 'express';
import type { Rule, Subject } from '../access.ts';
import type { Actor, Deps } from '../context.ts';
import { notAllowed, notFound, notSignedIn } from '../errors.ts';
import { isWithinReach } from '../services/ownership.ts';
import { getActor } from './sessions.ts';

const subjectWords: Record<Subject, string> = {
  application: 'The application',
  run: 'The run',
  file: 'The file',
  message: 'The message',
  report: 'The report',
};

async function checkAccess(deps: Deps, rule: Rule, actor: Actor | null, id: string): Promise<void> {
  if (rule.demoOnly && !deps.config.demo) throw notFound();
  if (actor === null) {
    if (rule.anonymous) return;
    throw notSignedIn();
  }
  const reach = rule.roles[actor.role];
  if (reach === 'none') throw notAllowed();
  if (rule.subject === undefined) return;
  if (!(await isWithinReach(deps, actor, reach, rule.subject, id)))
    throw notFound(subjectWords[rule.subject]);
}

/** 401, 403 or 404 by the action's rule, before anything of the request is read but who asks and for what. */
export function authorise(deps: Deps, rule: Rule): RequestHandler {
  return async (request, _response, next) => {
    await checkAccess(deps, rule, getActor(request), String(request.params.id ?? ''));
    next();
  };
}
