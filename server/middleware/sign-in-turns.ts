interface Settings {
  /** Turns that are taken at once; each that is not given back is made good by time. */
  most: number;
  /** After so long one used turn is made good. */
  turnMilliseconds: number;
  /** Who waits longer is sent away. */
  patienceMilliseconds: number;
  /** Who waits at the same time; one more takes the place of one of them, by lot. */
  seats: number;
}

interface Room {
  used: number;
  waiting: Map<symbol, (isMine: boolean) => void>;
  timer?: NodeJS.Timeout;
}

/**
 * Turns of one kind, counted for each key. As long as there are turns nobody waits; then one is made good every
 * `turnMilliseconds`, and of those who wait for it one is drawn by lot: who asks most has the better chances, but
 * nobody can keep all of them, and nobody is shut out for a time.
 */
export class SignInTurns {
  private readonly rooms = new Map<string, Room>();
  private readonly settings: Settings;
  private readonly random: () => number;

  constructor(settings: Settings, random: () => number = Math.random) {
    this.settings = settings;
    this.random = random;
  }

  get turnSeconds(): number {
    return Math.ceil(this.settings.turnMilliseconds / 1000);
  }

  /** True when it is this one's turn; false when it went away, was displaced, or waited too long. */
  take(key: string, leave: AbortSignal): Promise<boolean> {
    const room = this.rooms.get(key) ?? { used: 0, waiting: new Map() };
    this.rooms.set(key, room);
    if (room.used < this.settings.most) {
      this.use(key, room);
      return Promise.resolve(true);
    }
    if (room.waiting.size >= this.settings.seats) this.draw(room)?.(false);
    return new Promise((resolve) => this.wait(room, leave, resolve));
  }

  /** What was no wrong guess costs nothing. */
  giveBack(key: string): void {
    const room = this.rooms.get(key);
    if (room !== undefined) this.makeGood(key, room);
  }

  private wait(room: Room, leave: AbortSignal, resolve: (isMine: boolean) => void): void {
    const seat = Symbol('seat');
    const end = (isMine: boolean) => {
      clearTimeout(late);
      leave.removeEventListener('abort', goAway);
      room.waiting.delete(seat);
      resolve(isMine);
    };
    const goAway = () => end(false);
    const late = setTimeout(() => end(false), this.settings.patienceMilliseconds);
    late.unref();
    room.waiting.set(seat, end);
    if (leave.aborted) goAway();
    else leave.addEventListener('abort', goAway);
  }

  private draw(room: Room): ((isMine: boolean) => void) | undefined {
    return [...room.waiting.values()][Math.floor(this.random() * room.waiting.size)];
  }

  private use(key: string, room: Room): void {
    room.used += 1;
    room.timer ??= setInterval(() => this.makeGood(key, room), this.settings.turnMilliseconds).unref();
  }

  private makeGood(key: string, room: Room): void {
    room.used -= 1;
    const next = this.draw(room);
    if (next !== undefined) {
      this.use(key, room);
      next(true);
    } else if (room.used <= 0) {
      clearInterval(room.timer);
      this.rooms.delete(key);
    }
  }
}
