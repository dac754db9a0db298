/** File names made from names in a project: safe on every file system, and never outside the output folder. */

/** Names that some systems keep for devices, whatever their ending. */
const RESERVED = /^(con|prn|aux|nul|com\d|lpt\d)$/i;
const LONGEST = 60;

/** Letters, digits, `-` and `_`; never empty. */
export function safeName(name: string): string {
  const plain = name
    .normalize('NFKD')
    .replace(/[^A-Za-z0-9_-]+/g, '-')
    .replace(/^-+|-+$/g, '')
    .slice(0, LONGEST)
    .toLowerCase();
  if (plain === '') return 'unnamed';
  return RESERVED.test(plain) ? `${plain}-` : plain;
}

/** One safe name each; where two would be the same, the later ones carry a number. */
export function safeNames(names: readonly string[]): string[] {
  const used = new Set<string>();
  return names.map((name) => {
    const base = safeName(name);
    let unique = base;
    for (let n = 2; used.has(unique); n++) unique = `${base}-${n}`;
    used.add(unique);
    return unique;
  });
}

export const layerFile = (folder: string, index: number, ending: string): string =>
  `${folder}/layer-${String(index).padStart(2, '0')}.${ending}`;
