/** The resident compute child: bytes in, bytes out. Whoever started it may end it at any moment. */
import type { ComputeReply, ComputeRequest } from '../server/compute-messages.ts';
import { answerQuestion } from './answer-question.ts';

function reply(message: ComputeReply): void {
  process.send?.(message);
}

async function answerRequest({ id, kind, question }: ComputeRequest): Promise<void> {
  try {
    const answer = await answerQuestion(kind, question, (step) => reply({ id, kind: 'step', step }));
    reply({ id, kind: 'answer', answer });
  } catch (error) {
    const message = error instanceof Error ? (error.stack ?? error.message) : String(error);
    reply({ id, kind: 'fault', message });
  }
}

process.on('message', (request: ComputeRequest) => void answerRequest(request));

// Who asked is gone: nobody is left to compute for.
process.on('disconnect', () => process.exit(0));
// Ctrl-C reaches the whole group; the one who started us ends us in its own order.
process.on('SIGINT', () => undefined);
