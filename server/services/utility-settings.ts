import type { Database } from '../../db/connection.ts';
import { findSetting } from '../../db/repositories/settings.ts';

export interface UtilitySettings {
  name: string;
  /** IANA name; every local date is of this zone. */
  timeZone: string;
  contactEmail: string;
  /** Before the number that people quote: "ML" in ML-1042. */
  referencePrefix: string;
}

export async function getUtilitySettings(db: Database): Promise<UtilitySettings> {
  const stored = (await findSetting(db, 'utility')) as Partial<UtilitySettings> | undefined;
  return { name: 'The utility', timeZone: 'UTC', contactEmail: '', referencePrefix: 'APP', ...stored };
}

/** As people quote an application; a draft has no number yet. */
export function writeReference(utility: UtilitySettings, number: number | null): string {
  return number === null ? 'Draft' : `${utility.referencePrefix}-${number}`;
}
