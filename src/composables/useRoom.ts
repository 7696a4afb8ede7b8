import { useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import type { RoomView } from '../../shared/schemas/rooms.ts';
import { askForRoom, getRoom } from '../api/rooms.ts';

/** While it is worked out nothing is told about it: it is asked for again. */
const everyMs = 1000;

/** The room of one network model (staff only). */
export function useRoom(code: Ref<string>) {
  const client = useQueryClient();
  const queryKey = computed(() => ['room', code.value]);
  const isUnderWay = (view: RoomView | null | undefined) =>
    view?.state === 'queued' || view?.state === 'running';
  const room = useQuery({
    queryKey,
    queryFn: () => getRoom(code.value),
    refetchInterval: (query) => (isUnderWay(query.state.data) ? everyMs : false),
  });
  async function ask() {
    const answer = await askForRoom(code.value);
    client.setQueryData(queryKey.value, answer);
    await client.invalidateQueries({ queryKey: queryKey.value });
    return answer;
  }
  return { room, ask, isUnderWay: computed(() => isUnderWay(room.data.value)) };
}
