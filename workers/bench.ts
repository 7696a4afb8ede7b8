import { spawnSync } from 'node:child_process';
import { measureMathjs } from './bench/mathjs-peer.ts';
import type { NetworkKind } from './bench/networks.ts';
import { networkKinds } from './bench/networks.ts';
import { measureOneState } from './bench/one-state.ts';
import { measureWholeStudy } from './bench/whole-study.ts';

/*
 * Times the engine; `npm run bench -- engine` prints JSON. Each network is measured in a process of its own, so that its
 * peak of memory is its own and no other network has shaped the code. On a busy machine read the ratios, not the times.
 */

const sizes = [1000, 10_000, 100_000];

type Measured = {
  kind: NetworkKind;
  nodes: number;
  oneState: ReturnType<typeof measureOneState>;
  study: ReturnType<typeof measureWholeStudy>;
  peakMemoryMb: number;
};

function measure(kind: NetworkKind, nodes: number): Measured {
  const oneState = measureOneState(kind, nodes);
  const study = measureWholeStudy(kind, nodes);
  // maxRSS is in KiB.
  return { kind, nodes, oneState, study, peakMemoryMb: Math.round(process.resourceUsage().maxRSS / 1024) };
}

function measureApart(kind: NetworkKind, nodes: number): Measured {
  const child = spawnSync(process.execPath, [process.argv[1]!, 'engine', kind, String(nodes)], {
    encoding: 'utf8',
    stdio: ['ignore', 'pipe', 'inherit'],
    maxBuffer: 1 << 26,
  });
  if (child.status !== 0)
    throw new Error(`${kind} with ${nodes} nodes: got exit code ${child.status}, expected 0`);
  return JSON.parse(child.stdout) as Measured;
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

const [what, kind, nodes] = process.argv.slice(2);
if (what !== 'engine') {
  process.stderr.write(`got ${JSON.stringify(what ?? '')}, expected: npm run bench -- engine\n`);
  process.exitCode = 2;
} else if (kind !== undefined) {
  process.stdout.write(JSON.stringify(measure(kind as NetworkKind, Number(nodes))));
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
