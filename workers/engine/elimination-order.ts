/*
 * In which order to eliminate the buses so that few new couplings arise.
 *
 * Minimum degree: take next whichever bus has the fewest neighbours left, and join those neighbours to each other
 * (W. F. Tinney, J. W. Walker, "Direct solutions of sparse network equations by optimally ordered triangular
 * factorization", Proc. IEEE 55 (1967), scheme 2). On a tree no coupling arises at all: the leaves go first.
 */

/** Neighbours of bus v are `neighbour[start[v]] … neighbour[start[v + 1] - 1]`; parallel branches repeat them. */
export type Adjacency = { readonly start: Int32Array; readonly neighbour: Int32Array };

/** Vertices by degree, in doubly linked lists, so that the next one is found and moved without a search. */
class DegreeLists {
  private readonly head: Int32Array;
  private readonly next: Int32Array;
  private readonly previous: Int32Array;
  private readonly degree: Int32Array;
  private lowest = 0;

  constructor(degree: Int32Array) {
    this.degree = degree;
    const count = degree.length;
    this.head = new Int32Array(count + 1).fill(-1);
    this.next = new Int32Array(count);
    this.previous = new Int32Array(count);
    for (let v = count - 1; v >= 0; v--) this.insert(v);
  }

  takeLowest(): number {
    while (this.head[this.lowest] === -1) this.lowest++;
    const v = this.head[this.lowest]!;
    this.remove(v);
    return v;
  }

  changeDegree(v: number, by: number): void {
    this.remove(v);
    this.degree[v]! += by;
    this.insert(v);
  }

  private insert(v: number): void {
    const d = this.degree[v]!;
    const first = this.head[d]!;
    this.next[v] = first;
    this.previous[v] = -1;
    if (first !== -1) this.previous[first] = v;
    this.head[d] = v;
    if (d < this.lowest) this.lowest = d;
  }

  private remove(v: number): void {
    const before = this.previous[v]!;
    const after = this.next[v]!;
    if (before === -1) this.head[this.degree[v]!] = after;
    else this.next[before] = after;
    if (after !== -1) this.previous[after] = before;
  }
}

/** Longer lists are not read to find one bus in them: a hub would be read once per spoke. */
const longList = 16;

/** The neighbour lists while buses are eliminated: those gone are skipped, and dropped when a list is next read. */
class EliminationGraph {
  readonly degree: Int32Array;
  private readonly listed: Int32Array;
  private readonly first: Int32Array;
  private readonly room: Int32Array;
  private pool: Int32Array;
  private used: number;
  private readonly gone: Uint8Array;

  constructor(adjacency: Adjacency) {
    const { start, neighbour } = adjacency;
    const count = start.length - 1;
    this.first = start.slice(0, count);
    this.room = new Int32Array(count);
    this.listed = new Int32Array(count);
    this.degree = new Int32Array(count);
    this.pool = new Int32Array(neighbour.length * 2 + 64);
    this.used = neighbour.length;
    this.gone = new Uint8Array(count);
    const seenBy = new Int32Array(count).fill(-1);
    for (let v = 0; v < count; v++) {
      let kept = 0;
      for (let p = start[v]!; p < start[v + 1]!; p++) {
        const u = neighbour[p]!;
        if (u === v || seenBy[u] === v) continue;
        seenBy[u] = v;
        this.pool[start[v]! + kept++] = u;
      }
      this.room[v] = start[v + 1]! - start[v]!;
      this.listed[v] = this.degree[v] = kept;
    }
  }

  eliminate(v: number): void {
    this.gone[v] = 1;
  }

  /** Writes the neighbours that v still has into `into` and gives their number. */
  readNeighbours(v: number, into: Int32Array): number {
    const first = this.first[v]!;
    let kept = 0;
    for (let p = first; p < first + this.listed[v]!; p++) {
      const u = this.pool[p]!;
      if (this.gone[u]) continue;
      this.pool[first + kept] = u;
      into[kept++] = u;
    }
    this.listed[v] = kept;
    return kept;
  }

  putLongestLast(ring: Int32Array, size: number): void {
    for (let i = 0; i < size - 1; i++) {
      const u = ring[i]!;
      const last = ring[size - 1]!;
      if (this.listed[u]! <= this.listed[last]!) continue;
      ring[i] = last;
      ring[size - 1] = u;
    }
  }

  /** Puts `by` in the place of `gone` in the list of v; false, and nothing done, where v has `by` already. */
  replace(v: number, gone: number, by: number): boolean {
    const first = this.first[v]!;
    const end = first + this.listed[v]!;
    let place = -1;
    for (let p = first; p < end; p++) {
      const u = this.pool[p]!;
      if (u === by) return false;
      if (u === gone) place = p;
    }
    this.pool[place] = by;
    return true;
  }

  isLong(v: number): boolean {
    return this.listed[v]! > longList;
  }

  isLonger(v: number, u: number): boolean {
    return this.listed[v]! > this.listed[u]!;
  }

  append(v: number, u: number): void {
    if (this.listed[v] === this.room[v]) this.moveToMoreRoom(v);
    this.pool[this.first[v]! + this.listed[v]!] = u;
    this.listed[v]!++;
  }

  private moveToMoreRoom(v: number): void {
    const room = Math.max(4, this.room[v]! * 2);
    if (this.used + room > this.pool.length) {
      const larger = new Int32Array(Math.max(this.pool.length * 2, this.used + room));
      larger.set(this.pool.subarray(0, this.used));
      this.pool = larger;
    }
    this.pool.copyWithin(this.used, this.first[v]!, this.first[v]! + this.listed[v]!);
    this.first[v] = this.used;
    this.room[v] = room;
    this.used += room;
  }
}

/** Gives the buses in minimum-degree order; a path 0–1–2 gives an order in which 1 is never first. */
export function orderByMinimumDegree(adjacency: Adjacency): Int32Array {
  const count = adjacency.start.length - 1;
  const graph = new EliminationGraph(adjacency);
  const lists = new DegreeLists(graph.degree);
  const order = new Int32Array(count);
  const ring = new Int32Array(count);
  const theirs = new Int32Array(count);
  const gained = new Int32Array(count);
  const joinedTo = new Int32Array(count).fill(-1);
  for (let k = 0; k < count; k++) {
    const v = lists.takeLowest();
    order[k] = v;
    const size = graph.readNeighbours(v, ring);
    graph.eliminate(v);
    if (size === 2) {
      joinPair(v);
      continue;
    }
    joinRing(size);
    for (let i = 0; i < size; i++) {
      lists.changeDegree(ring[i]!, gained[ring[i]!]! - 1);
      gained[ring[i]!] = 0;
    }
  }
  return order;

  /** Most of a mesh lies in series: what is between two buses gives its place in their lists to the other, and no degree changes. */
  function joinPair(v: number): void {
    const isFirstLonger = graph.isLonger(ring[0]!, ring[1]!);
    const u = ring[isFirstLonger ? 1 : 0]!;
    const w = ring[isFirstLonger ? 0 : 1]!;
    if (graph.replace(u, v, w)) {
      if (graph.isLong(w)) graph.append(w, u);
      else graph.replace(w, v, u);
    } else {
      lists.changeDegree(u, -1);
      lists.changeDegree(w, -1);
    }
  }

  /** Joins every pair of the ring; the longest list is never read, or a hub would be read once per spoke. */
  function joinRing(size: number): void {
    graph.putLongestLast(ring, size);
    for (let i = 0; i < size - 1; i++) {
      const u = ring[i]!;
      const known = graph.readNeighbours(u, theirs);
      // A mark from an earlier ring is still true: neighbours stay neighbours until they are eliminated.
      for (let p = 0; p < known; p++) joinedTo[theirs[p]!] = u;
      for (let q = i + 1; q < size; q++) {
        const w = ring[q]!;
        if (joinedTo[w] === u) continue;
        graph.append(u, w);
        graph.append(w, u);
        gained[u]!++;
        gained[w]!++;
      }
    }
  }
}
