/**
 * The shortest of several runs, in ms of processor time of all threads, collecting garbage included: what else the machine
 * does can only make a run longer, and time spent waiting for it is not counted.
 */
export function shortestMs(run: () => void, leastRuns: number, leastMs = 200): number {
  let shortest = Infinity;
  let total = 0;
  for (let done = 0; done < leastRuns || total < leastMs; done++) {
    const before = process.cpuUsage();
    run();
    const { user, system } = process.cpuUsage(before);
    shortest = Math.min(shortest, (user + system) / 1000);
    total += (user + system) / 1000;
  }
  return shortest;
}
