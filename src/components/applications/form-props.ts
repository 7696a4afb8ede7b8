import type { Answers } from '../../../shared/schemas/answers.ts';
import type { PaperView } from '../../../shared/schemas/files.ts';
import type { useForm } from '../../composables/useForm.ts';

/** What every part of the form is given: its errors, the answers of the other parts, the papers already there. */
export interface FieldsProps {
  form: ReturnType<typeof useForm>;
  context: Answers;
  papers: readonly PaperView[];
}
