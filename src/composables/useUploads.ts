import { ref } from 'vue';
import type { FileView } from '../../shared/schemas/files.ts';
import { ApiProblem } from '../api/client.ts';
import { sendFile } from '../api/files.ts';

/** Sends files one after the other; what is refused is told by name and does not stop the rest. */
export function useUploads() {
  const progress = ref<number | null>(null);
  const sending = ref<string>();
  const refusals = ref<string[]>([]);

  async function send(files: readonly File[]): Promise<FileView[]> {
    const sent: FileView[] = [];
    refusals.value = [];
    for (const file of files) {
      sending.value = file.name;
      progress.value = 0;
      try {
        sent.push(await sendFile(file, (percent) => (progress.value = percent)));
      } catch (problem) {
        if (!(problem instanceof ApiProblem)) throw problem;
        refusals.value.push(`${file.name}: ${problem.message}`);
      }
    }
    progress.value = null;
    sending.value = undefined;
    return sent;
  }

  return { send, progress, sending, refusals };
}
