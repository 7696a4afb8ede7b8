import { spawnSync } from 'node:child_process';
import { measureMathjs } from './bench/mathjs-peer.ts';
import type { NetworkKind } from './bench/networks.ts';
import { networkKinds } from './bench/networks.ts';
import { measureOneState } from './bench/one-state.ts';
import { measurePeakMemory } from './bench/peak-memory.ts';
import { measureRoom } from './bench/room.ts';
import { measureTrial } from './bench/trial.ts';
import { measureWholeStudy } from './bench/whole-study.ts';

/*
 * Times the engine; `npm run bench -- engine` prints JSON, as do `-- trial` and `-- room` for what somebody waits for. Each network is measured in a process of its own, so that no
 * other has shaped the code, and its peak of memory in another. On a busy machine read the ratios, not the times.
 */

const sizes = [1000, 10_000, 100_000];

type Measured = {
  kind: NetworkKind;
  nodes: number;
  oneState: ReturnType<typeof measureOneState>;
  study: ReturnType<typeof measureWholeStudy>;
  /** Of one study with its project, from text to text. */
  peakMemoryMb: { asItStands: number; withThreeScenarios: number };
};

function measureTimes(kind: NetworkKind, nodes: number): Pick<Measured, 'oneState' | 'study'> {
  return { oneState: measureOneState(kind, nodes), study: measureWholeStudy(kind, nodes) };
}

function measureApart(kind: NetworkKind, nodes: number): Measured {
  const measure = (...what: string[]): unknown => {
    const child = spawnSync(process.execPath, [process.argv[1]!, 'engine', kind, String(nodes), ...what], {
      encoding: 'utf8',
      stdio: ['ignore', 'pipe', 'inherit'],
      maxBuffer: 1 << 26,
    });
    if (child.status !== 0)
      throw new Error(`${kind} with ${nodes} nodes: got exit code ${child.status}, expected 0`);
    return JSON.parse(child.stdout);
  };
  const times = measure() as ReturnType<typeof measureTimes>;
  const peakOf = (scenarioCount: number) => measure('memory', String(scenarioCount)) as number;
  return { kind, nodes, ...times, peakMemoryMb: { asItStands: peakOf(0), withThreeScenarios: peakOf(3) } };
}

function growthOf(networks: readonly Measured[], kind: NetworkKind) {
  const timesAt = (nodes: number) =>
    networks.find((each) => each.kind === kind && each.nodes === nodes)!.oneState.timesBareSweep;
  return {
    kind,
    timesBareSweep: Object.fromEntries(sizes.map((nodes) => [nodes, timesAt(nodes)])),
    largestOverSmallest: Math.round((timesAt(sizes.at(-1)!) / timesAt(sizes[0]!)) * 100) / 100,
  };
}

const [what, kind, nodes, aspect, scenarioCount] = process.argv.slice(2);
const ofDesk = { trial: measureTrial, room: measureRoom };
if (what === 'trial' || what === 'room') {
  const report = await ofDesk[what](1000);
  process.stdout.write(`${JSON.stringify({ [what]: report }, null, 2)}\n`);
} else if (what !== 'engine') {
  process.stderr.write(
    `got ${JSON.stringify(what ?? '')}, expected: npm run bench -- engine, trial or room\n`,
  );
  process.exitCode = 2;
} else if (kind !== undefined) {
  const network = [kind as NetworkKind, Number(nodes)] as const;
  const measured =
    aspect === 'memory' ? measurePeakMemory(...network, Number(scenarioCount)) : measureTimes(...network);
  process.stdout.write(JSON.stringify(measured));
} else {
  const networks = networkKinds.flatMap((each) => sizes.map((count) => measureApart(each, count)));
  const report = {
    networks,
    growth: networkKinds.map((each) => growthOf(networks, each)),
    peers: [
      measureMathjs(),
      {
        peer: "a solve for each node with the engine's own factors, three networks",
        note: 'extrapolated from one solve: nsPerNode.solvePerNodeExtrapolated of each network',
      },
    ],
  };
  process.stdout.write(`${JSON.stringify(report, null, 2)}\n`);
}
