import { useQuery } from '@tanstack/vue-query';
import { computed, type Ref } from 'vue';
import { listAuditEntries } from '../api/applications.ts';

export const useAudit = (applicationId: Ref<string>) =>
  useQuery({
    queryKey: computed(() => ['audit', applicationId.value]),
    queryFn: () => listAuditEntries(applicationId.value),
  });
