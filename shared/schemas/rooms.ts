/* Room: how much more could connect at each place of a model, one project at a time. */

/** What keeps a plant from being larger there. */
export interface RoomLimit {
  question: string;
  element: string | null;
}

/** The largest plant of a kind at one node. */
export interface RoomSize {
  kva: number;
  /** null where the largest size that is tried passes. */
  bindsAt: RoomLimit | null;
}

export interface RoomNode {
  node: string;
  circuit: string | null;
  kv: number;
  inverters: RoomSize;
  machine: RoomSize;
  /** Questions that lack data there: what they could not tell was left out, so that they may allow less. */
  lacking: string[];
}

export interface Room {
  nodes: RoomNode[];
  /** Questions that every size was put to. */
  counted: string[];
  /** Questions of the rule set that are left out: they hang on the plant itself, or take a study at every size. */
  notCounted: string[];
  mostKva: number;
}

export type RoomState = 'queued' | 'running' | 'finished' | 'failed';

/** The room of one version of a model, by one rule set, with everything that is ahead in the queue. */
export interface RoomView {
  publicId: string;
  modelCode: string;
  modelVersion: number;
  ruleSet: string;
  state: RoomState;
  percent: number;
  askedBy: string;
  askedAt: string;
  finishedAt: string | null;
  error: string | null;
  /** Whether the model, its queue or the rules have changed since. */
  stale: boolean;
  room: Room | null;
}
