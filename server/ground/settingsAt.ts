import { estateSettings, type EstateSettings } from '../../shared/contracts/estate.ts';
import { AuditEntry } from '../models/AuditEntry.ts';
import { Estate } from '../models/Estate.ts';

/** Numbers that the estate sets for itself; with `until` as they stood at that moment, by the history of their changes. */
export async function loadSettings(estateId: string, until: Date | null = null): Promise<EstateSettings> {
  const { settings } = await Estate.query().findById(estateId).select('settings').throwIfNotFound();
  if (until === null) return estateSettings.parse(settings);
  const later = (actions: string) => AuditEntry.query().where({ estateId, action: actions }).where('at', '>', until).orderBy('id').first();
  const [changed, chosen] = await Promise.all([later('estate.settings'), later('lots.alcoholMethod')]);
  // Each entry keeps all settings as they were before it, and a choice of the way to alcohol only that one.
  const then = estateSettings.parse((changed?.before as { settings?: unknown } | undefined)?.settings ?? settings);
  const method = chosen ? (chosen.before as { method: EstateSettings['alcoholMethod'] }).method : estateSettings.parse(settings).alcoholMethod;
  return { ...then, alcoholMethod: method };
}
