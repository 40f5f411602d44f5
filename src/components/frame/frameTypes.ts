import type { RouteLocationRaw } from 'vue-router';
import type { Role } from '../../../shared/catalog/roles.ts';
import type { ThemeChoice } from '../../composables/useTheme.ts';
import type { Language } from '../../lib/format.ts';
import type { UnitSystem } from '../../lib/units.ts';

export interface FrameLink {
  readonly name: string;
  readonly to: RouteLocationRaw;
  readonly isHere: boolean;
}

export interface FrameAccount {
  readonly name: string;
  readonly email: string | null;
  readonly role: Role | null;
  readonly language: Language;
  readonly units: UnitSystem;
  readonly theme: ThemeChoice;
}
