import { useQuery } from '@tanstack/vue-query';
import { computed } from 'vue';
import type { EquipmentView } from '../../shared/schemas/equipment.ts';
import { listEquipment } from '../api/equipment.ts';

/** The released equipment records: generating units and transformers. */
export function useEquipment() {
  const query = useQuery({ queryKey: ['equipment'], queryFn: () => listEquipment(), staleTime: 300_000 });
  const all = computed<EquipmentView[]>(() => query.data.value ?? []);
  return {
    records: computed(() => all.value.filter((record) => record.kind !== 'transformer')),
    transformers: computed(() => all.value.filter((record) => record.kind === 'transformer')),
    all,
    query,
  };
}
