/** A version 4 identifier from the seeded stream, so that the demo is the same each time. */
export function uuidFrom(random: () => number): string {
  const hex = Array.from({ length: 32 }, (_, place) => (place === 12 ? 4 : place === 16 ? 8 + Math.floor(random() * 4) : Math.floor(random() * 16)).toString(16)).join('');
  return [hex.slice(0, 8), hex.slice(8, 12), hex.slice(12, 16), hex.slice(16, 20), hex.slice(20)].join('-');
}
