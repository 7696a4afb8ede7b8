/** The resident compute child: bytes in, bytes out. Whoever started it may end it at any moment. */
import type { ComputeReply, ComputeRequest } from './compute-messages.ts';
import { computeStudy } from './compute-study.ts';

function reply(message: ComputeReply): void {
  process.send?.(message);
}

process.on('message', ({ id, studyBytes, ruleSet }: ComputeRequest) => {
  try {
    const answer = computeStudy(studyBytes, ruleSet, (step) => reply({ id, kind: 'step', step }));
    reply({ id, kind: 'answer', answer });
  } catch (error) {
    reply({
      id,
      kind: 'fault',
      message: error instanceof Error ? (error.stack ?? error.message) : String(error),
    });
  }
});

// Who asked is gone: nobody is left to compute for.
process.on('disconnect', () => process.exit(0));
// Ctrl-C reaches the whole group; the one who started us ends us in its own order.
process.on('SIGINT', () => undefined);
