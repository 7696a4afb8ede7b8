/** Body of a server-sent event: never more than which thing moved; the client fetches it with its own rights. */
export interface LiveEvent {
  kind: 'application' | 'run';
  id: string;
  /** The application that a run belongs to (equal to id for applications). */
  applicationId: string;
  version: number;
}
