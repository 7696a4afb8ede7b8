import { useQueryClient } from '@tanstack/vue-query';
import { computed } from 'vue';
import type { SignIn } from '../../shared/schemas/sessions.ts';
import { useSessionStore } from '../stores/session.ts';

/** The signed-in person; another person signing in finds nothing of the one before. */
export function useSession() {
  const store = useSessionStore();
  const queryClient = useQueryClient();

  async function signIn(given: SignIn) {
    const session = await store.signIn(given);
    queryClient.clear();
    return session;
  }

  async function signOut() {
    await store.signOut();
    queryClient.clear();
  }

  const user = computed(() => store.user);
  const role = computed(() => store.user?.role);
  return {
    user,
    role,
    expired: computed(() => store.expired),
    isStaff: computed(() => role.value !== undefined && role.value !== 'applicant'),
    demo: computed(() => store.session?.demo ?? false),
    utility: computed(
      () => store.session?.utility ?? { name: '', territory: '', timeZone: 'UTC', contactEmail: '' },
    ),
    signIn,
    signOut,
  };
}
