import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Device } from '../../../shared/schemas/study.ts';
import { Working } from '../working.ts';
import { generatorsIn, holdsVoltage, listGenerators } from './island-generation.ts';
import { answerWithoutIslands, joinGaps } from './island-gaps.ts';
import { listIslands } from './islands.ts';
import type { Answered } from './judge.ts';
import { answer, ruleOf } from './judge.ts';
import type { Screening } from './screening.ts';

const question = 'reclosing';

type Reply = { device: Device; verdict: 'within' | 'outside' | 'needs-data'; note: string };

const gravity = { within: 0, 'needs-data': 1, outside: 2 } as const;

/**
 * Is automatic reclosing safe with the project running?
 * Every device that cuts the place off and closes again by itself waits for a dead line; or nothing beyond it can hold voltage and
 * the question of islanding is answered within. Rule parameter `islandStopS`: within what time generation has to stop
 * feeding an island (IEEE 1547-2018, 8.1), which the dead time is shown against.
 */
export function answerReclosing(screening: Screening, islanding: readonly Finding[]): Answered[] {
  if (listGenerators(screening).length === 0) {
    return [answer(screening, question, 'not-applicable', { note: 'Nothing generates here.' })];
  }
  const without = answerWithoutIslands(screening, question);
  if (without) return [without];
  const gravest = new Map<string, Reply>();
  for (const reply of listReplies(screening, islanding)) {
    const { device, verdict } = reply;
    const known = gravest.get(device.id);
    if (!known || gravity[verdict] > gravity[known.verdict]) gravest.set(device.id, reply);
  }
  const replies = [...gravest.values()];
  const open = replies.filter(({ verdict }) => verdict !== 'within');
  if (open.length > 0) {
    const answers = open.map((reply) => answerFor(screening, reply));
    return joinGaps(screening, question, answers);
  }
  const note = replies.map((each) => each.note).join(' ');
  return joinGaps(screening, question, [{ ...answerFor(screening, findShortest(replies)), note }]);
}

function listReplies(screening: Screening, islanding: readonly Finding[]): Reply[] {
  return listIslands(screening).flatMap(({ operating, islands }) =>
    islands.map((island) => {
      const { device } = island;
      const generators = generatorsIn(screening, operating, island);
      const reply = (verdict: Reply['verdict'], note: string) => ({ device, verdict, note });
      if (device.deadTimeS === 0) return reply('within', `${device.id} does not close again by itself.`);
      if (device.voltageSupervised) return reply('within', `${device.id} waits for a dead line.`);
      if (generators.length === 0) return reply('within', `Nothing generates beyond ${device.id}.`);
      const isKnown = device.voltageSupervised !== undefined;
      const supervision = isKnown
        ? `${device.id} closes without waiting for a dead line`
        : `Whether ${device.id} waits for a dead line is not known`;
      const holding = generators.find(holdsVoltage);
      if (holding) {
        const note = `${supervision}, and ${holding.id} beyond it can hold voltage.`;
        return reply(isKnown ? 'outside' : 'needs-data', note);
      }
      if (islanding.length === 0 || islanding.some(({ verdict }) => verdict === 'needs-data')) {
        return reply(
          'needs-data',
          `${supervision}, and whether an island can run on beyond it is not known.`,
        );
      }
      if (islanding.some(({ verdict }) => verdict === 'outside')) {
        const note = `${supervision}, and an island may run on beyond it.`;
        return reply(isKnown ? 'outside' : 'needs-data', note);
      }
      return reply('within', `Nothing beyond ${device.id} can hold voltage or run on as an island.`);
    }),
  );
}

/** The device with the shortest known dead time of those that close again. */
function findShortest(replies: readonly Reply[]): Reply {
  const time = ({ device }: Reply) => device.deadTimeS || Infinity;
  return replies.reduce((p, q) => (time(q) < time(p) ? q : p));
}

function answerFor(screening: Screening, { device, verdict, note }: Reply): Answered {
  const stopS = ruleOf(screening, question).parameters?.islandStopS;
  const { id: element, deadTimeS } = device;
  if (!deadTimeS || typeof stopS !== 'number') return answer(screening, question, verdict, { element, note });
  const working = new Working();
  const dead = working.given('t_dead', `Shortest time ${element} stays open`, deadTimeS, 's');
  const stop = working.given('t_stop', 'Time in which generation has to stop feeding an island', stopS, 's');
  const words = 'What is left of the dead time by then, shown and not deciding';
  working.compute({ symbol: 't_left', words, unit: 's' }, 't_dead - t_stop', [dead, stop], deadTimeS - stopS);
  const shown = `${element} stays open for ${deadTimeS} s, against the ${stopS} s in which generation has to stop feeding an island.`;
  return answer(screening, question, verdict, { element, note: `${note} ${shown}`, working: working.steps });
}
