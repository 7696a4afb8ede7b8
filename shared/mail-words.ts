/** What a kind of mail is about; a kind that is not listed is shown by its name. */
export const mailWords: Record<string, string> = {
  submitted: 'Application received',
  deficiency: 'Something is missing',
  complete: 'Application complete',
  'screening-done': 'Screening done',
  decision: 'Decision',
  withdrawn: 'Application withdrawn',
  moved: 'Next stage',
};
