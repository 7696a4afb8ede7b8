/** Body of every failed answer (application/problem+json). `path` is a dotted path into the request body. */
export interface Problem {
  title: string;
  status: number;
  code: string;
  errors: FieldProblem[];
  requestId?: string;
}

export interface FieldProblem {
  path: string;
  message: string;
}
