import type { Answers } from '../../../shared/schemas/answers.ts';
import type { PaperView } from '../../../shared/schemas/files.ts';
import type { useForm } from '../../composables/useForm.ts';

/** Of the other parts no more than what is read of them. */
export interface AnswersSoFar extends Omit<Answers, 'connection'> {
  connection?: Partial<NonNullable<Answers['connection']>>;
}

/** What every part of the form is given: its errors, the answers of the other parts, the papers already there. */
export interface FieldsProps {
  form: ReturnType<typeof useForm>;
  context: AnswersSoFar;
  papers: readonly PaperView[];
}
