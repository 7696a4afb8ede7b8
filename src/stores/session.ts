import { defineStore } from 'pinia';
import { computed, ref } from 'vue';
import type { SessionView, SignIn } from '../../shared/schemas/sessions.ts';
import { whenSignedOut } from '../api/client.ts';
import { getSession, signIn as askToSignIn, signOut as askToSignOut } from '../api/sessions.ts';

/** Who is signed in, as the server last said. */
export const useSessionStore = defineStore('session', () => {
  const session = ref<SessionView>();
  const user = computed(() => session.value?.user ?? null);
  let loading: Promise<SessionView> | undefined;

  /** The server no longer knows the person, who has not signed out here. */
  const expired = ref(false);

  whenSignedOut(() => {
    if (!session.value?.user) return;
    session.value = { ...session.value, user: null };
    expired.value = true;
  });

  /** Asks the server once; later calls give what is known. */
  async function load(): Promise<SessionView> {
    if (session.value) return session.value;
    loading ??= getSession().finally(() => (loading = undefined));
    session.value = await loading;
    return session.value;
  }

  async function signIn(given: SignIn): Promise<SessionView> {
    session.value = await askToSignIn(given);
    expired.value = false;
    return session.value;
  }

  async function signOut(): Promise<void> {
    session.value = await askToSignOut();
  }

  return { session, user, expired, load, signIn, signOut };
});
