import { Type } from '@sinclair/typebox';
import type { Response } from 'express';

/** The sizes of paper that documents are set for. */
export const PaperQuery = Type.Object(
  {
    paper: Type.Union([Type.Literal('a4'), Type.Literal('letter')], {
      default: 'letter',
      errorMessage: 'Choose A4 or Letter',
    }),
  },
  { additionalProperties: false },
);

/** For saving: a document is no page of ours. */
export function sendPdf(response: Response, { name, bytes }: { name: string; bytes: Uint8Array }): void {
  response
    .type('application/pdf')
    .set('content-disposition', `attachment; filename="${name}"`)
    .set('x-content-type-options', 'nosniff')
    .set('cache-control', 'private, no-store')
    .send(Buffer.from(bytes));
}
