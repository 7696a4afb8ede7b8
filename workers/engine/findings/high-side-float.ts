import type { Substation } from '../../../shared/schemas/study-utility.ts';
import type { Transformer, TransformerConnection } from '../../../shared/schemas/study.ts';
import { branchAt } from '../model-parts.ts';
import { Working } from '../working.ts';
import { listGenerators, sumKva } from './island-generation.ts';
import type { Generator } from './island-generation.ts';
import { kilowatts } from './island-balance.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import type { OperatingCase } from './operating-cases.ts';
import { describeDeciding } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { findCutOff } from './upstream.ts';

const question = 'high-side-float';

/** The bank on the way to the source in one operating case. */
type Bank = {
  operating: OperatingCase;
  name: string;
  substation: Substation | undefined;
  transformer: Transformer | undefined;
  /** What generates behind it; nothing where there is another way to a source. */
  generators: readonly Generator[] | undefined;
};

/**
 * Can the substation's high side float when the transmission line opens?
 * It cannot where the bank's own high side is an earthed star over a delta, and what protects it against zero-sequence
 * voltage trips the bank. Else all generation behind the bank has to stay under the bank's minimum load, so that nothing flows back.
 */
export function answerHighSideFloat(screening: Screening): Answered[] {
  if (listGenerators(screening).length === 0) {
    return [answer(screening, question, 'not-applicable', { note: 'Nothing generates here.' })];
  }
  const fed = screening.cases.filter(
    ({ upstream }) => upstream.path.length > 1 || upstream.isSource[screening.poi],
  );
  if (fed.length === 0)
    return [answer(screening, question, 'needs-data', { note: 'No source feeds this place.' })];
  const judged = fed.map((operating) => judgeBank(screening, findBank(screening, operating)));
  const gravity = { outside: 3, 'needs-data': 2, within: 1, 'not-applicable': 0 };
  const worst = judged.reduce((p, q) => {
    const difference = gravity[q.verdict] - gravity[p.verdict];
    return difference > 0 || (difference === 0 && (q.value ?? 0) > (p.value ?? 0)) ? q : p;
  });
  return [worst];
}

/** The bank nearest the source that a substation of the model names, or the transformer there; else the only substation. */
function findBank(screening: Screening, operating: OperatingCase): Bank {
  const { study, model, poi } = screening;
  const { substations = [], transformers = [] } = study.feeder;
  const onWay = operating.upstream.branches.flatMap((branch) => {
    const transformer = transformers.find(({ id }) => id === branchAt(model, branch).id);
    return transformer ? [{ branch, transformer }] : [];
  });
  const named = onWay.findLast(({ transformer }) =>
    substations.some((substation) => substation.transformer === transformer.id),
  );
  const found = named ?? onWay.at(-1);
  const unmodelled = substations.filter(({ transformer }) => transformer === undefined);
  const substation = named
    ? substations.find((each) => each.transformer === named.transformer.id)
    : unmodelled.length === 1
      ? unmodelled[0]
      : undefined;
  // A bank that the model lacks has all of the model behind it.
  const isModelled = named !== undefined || substation === undefined;
  const cutOff = isModelled && found ? findCutOff(operating.upstream, poi, found.branch) : undefined;
  const out = new Set(operating.solver.scenario?.out);
  const inService = listGenerators(screening).filter(({ id }) => !out.has(id));
  const behind = cutOff && inService.filter(({ node }) => cutOff[node]);
  return {
    operating,
    name: substation?.id ?? found?.transformer.id ?? screening.project.node,
    substation,
    transformer: isModelled ? found?.transformer : undefined,
    generators: isModelled && found ? behind : inService,
  };
}

function judgeBank(screening: Screening, bank: Bank): Answered {
  const { name: element, substation, generators, operating } = bank;
  const deciding = describeDeciding(screening.cases, operating);
  const reply = (verdict: Answered['verdict'], note: string) =>
    answer(screening, question, verdict, { element, note: [note, ...deciding].join(' ') });
  if (!substation) return reply('needs-data', 'Nothing is known of the substation that feeds this place.');
  const high = findHighSide(screening, bank);
  if (high === 'earthed')
    return reply(
      'not-applicable',
      `The high side of ${element} is an earthed star over a delta: it stays earthed.`,
    );
  if (substation.zeroSequenceVoltageProtection)
    return reply('within', `Zero-sequence voltage protection trips ${element} when its high side floats.`);
  if (!generators) {
    const note = `There is another way to a source past ${element}.`;
    return { ...reply('needs-data', note), consequence: 'study' };
  }
  const protection =
    substation.zeroSequenceVoltageProtection === false
      ? 'there is no zero-sequence voltage protection'
      : 'no zero-sequence voltage protection is known';
  if (!substation.minimumKw || substation.minimumKw < 0) {
    const note = `The minimum load of ${element} is not known, and ${protection}.`;
    return substation.reverseFlow
      ? reply('outside', `Power may flow back through ${element}, and ${protection}.`)
      : reply('needs-data', note);
  }
  const side =
    high === 'unknown'
      ? 'How its high side is connected is not known'
      : 'Its high side has no earth of its own';
  return judgeFlow(screening, bank, substation.minimumKw, [`${side}, and ${protection}.`, ...deciding]);
}

function judgeFlow(
  screening: Screening,
  { name: element, generators }: Bank,
  minimumKw: number,
  notes: readonly string[],
): Answered {
  const part = (ofProject: boolean) => sumKva(generators!.filter((each) => each.ofProject === ofProject));
  const working = new Working();
  const others = working.given(
    'P_others',
    `Connected or ahead in the queue behind ${element}`,
    part(false),
    'kW',
  );
  const project = working.given('P_project', 'Of the project, nameplate', part(true), 'kW');
  const minimum = working.given('L_min', `Minimum load of all that ${element} feeds`, minimumKw, 'kW');
  const value = ((part(false) + part(true)) / minimumKw) * 100;
  working.compute(
    { symbol: 'ratio', words: 'All generation over that minimum', unit: '%' },
    '(P_others + P_project)/L_min*100',
    [others, project, minimum],
    value,
  );
  const sizes = `${kilowatts(part(false))} connected or ahead and ${kilowatts(part(true))} of the project, against a minimum of ${kilowatts(minimumKw)}.`;
  return judge(screening, question, {
    element,
    value,
    before: (part(false) / minimumKw) * 100,
    note: [sizes, ...notes].join(' '),
    working: working.steps,
  });
}

/** How the high side of a bank stands to earth when the line that feeds it is gone. */
function findHighSide(
  { study }: Screening,
  { substation, transformer }: Bank,
): 'earthed' | 'floating' | 'unknown' {
  if (transformer) {
    const kvOf = (node: string) => study.feeder.nodes.find(({ id }) => id === node)!.kv;
    const isFromHigh = kvOf(transformer.from) >= kvOf(transformer.to);
    const neutral = isFromHigh ? transformer.neutralFrom : transformer.neutralTo;
    return readHighSide(transformer.connection, isFromHigh, neutral === 'ungrounded');
  }
  if (!substation?.connection) return 'unknown';
  // Told of a bank without its two ends, the letters begin with the high side.
  return readHighSide(substation.connection, true, false);
}

/** Only an earthed star over a delta has an earth of its own: a star over a star leans on what the other side has. */
function readHighSide(
  connection: TransformerConnection,
  isFromHigh: boolean,
  isUngrounded: boolean,
): 'earthed' | 'floating' {
  const [, from = '', to = ''] = /^(YN|Y|D)(yn|y|d|YN|Y|D)/i.exec(connection) ?? [];
  const [high, low] = isFromHigh ? [from, to] : [to, from];
  return high.toUpperCase() === 'YN' && low.toUpperCase() === 'D' && !isUngrounded ? 'earthed' : 'floating';
}
