import type { PersonView } from '../../shared/schemas/people.ts';
import { getJson } from './client.ts';

export function listPeople(): Promise<PersonView[]> {
  return getJson('/api/people');
}
