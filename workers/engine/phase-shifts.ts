/** Phase shifts between nodes, in steps of 30°: sets of joined nodes, each node with its lag behind another of its set. */
export class PhaseShifts {
  private readonly leader: Int32Array;
  private readonly size: Int32Array;
  /** By how much a node lags its leader. */
  private readonly lag: Int8Array;

  constructor(count: number) {
    this.leader = new Int32Array(count);
    for (let node = 0; node < count; node++) this.leader[node] = node;
    this.size = new Int32Array(count).fill(1);
    this.lag = new Int8Array(count);
  }

  /** Says that v lags u, and gives by how much it does: something else only where that was settled before. */
  join(u: number, v: number, lag: number): number {
    // Sets are joined by size, which keeps these ways up short without shortening them.
    let [head, lagOfU] = [u, 0];
    for (; this.leader[head] !== head; head = this.leader[head]!) lagOfU += this.lag[head]!;
    let [other, lagOfV] = [v, 0];
    for (; this.leader[other] !== other; other = this.leader[other]!) lagOfV += this.lag[other]!;
    if (head === other) return modulo12(lagOfV - lagOfU);
    // How far v's leader must lag u's for v to lag u as said.
    const between = lagOfU + lag - lagOfV;
    if (this.size[head]! >= this.size[other]!) this.hang(other, head, between);
    else this.hang(head, other, -between);
    return lag;
  }

  private hang(small: number, large: number, lag: number): void {
    this.leader[small] = large;
    this.size[large]! += this.size[small]!;
    this.lag[small] = modulo12(lag);
  }
}

function modulo12(hours: number): number {
  return ((hours % 12) + 12) % 12;
}
