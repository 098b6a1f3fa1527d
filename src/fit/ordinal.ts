/** `1st`, `2nd`, `3rd`, `4th`, `11th`. */
export function ordinal(position: number): string {
  const tail = position % 100 >= 11 && position % 100 <= 13 ? 'th' : (['th', 'st', 'nd', 'rd'][position % 10] ?? 'th');
  return `${position}${tail}`;
}
