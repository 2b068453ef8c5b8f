/** The protocol counts a cursor in Unicode characters, JavaScript in UTF-16 units: they differ after a character beyond the basic plane. */
export function unitsFromCharacters(text: string, characters: number): number {
  let units = 0;
  for (let left = characters; left > 0 && units < text.length; left--) units += text.codePointAt(units)! > 0xffff ? 2 : 1;
  return units;
}

export function charactersFromUnits(text: string, units: number): number {
  return [...text.slice(0, units)].length;
}
