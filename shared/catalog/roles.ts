/** The roles a person can hold in an estate. A person with two roles may do what either may. */
export const roles = ['owner', 'admin', 'agronomist', 'manager', 'winemaker', 'crew', 'lab', 'guest'] as const;
export type Role = (typeof roles)[number];

export function isRole(value: string): value is Role {
  return (roles as readonly string[]).includes(value);
}
