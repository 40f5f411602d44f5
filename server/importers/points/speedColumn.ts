/** The column that holds the speed of a reading, in any unit; null when no name tells. */
const speedName = /^(gps[ _-]?)?(speed|spd|velocity|velocidad|velocidade|vitesse|velocit[aà]|sog)([ _-]?(km ?\/?h|kph|m ?\/? ?s|mph|\(.*\)))?$/i;

export function speedColumn(names: Iterable<string>): string | null {
  return [...names].find((name) => speedName.test(name.trim())) ?? null;
}
