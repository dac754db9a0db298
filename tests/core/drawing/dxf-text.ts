/** DXF files for tests, from group codes and values by turns. */

export type Groups = (number | string)[];

export interface Around {
  /** $INSUNITS; absent for a header without it. */
  units?: number;
  /** Blocks with the base point (1, 2). */
  blocks?: Record<string, Groups>;
  /** Layers with their flags (group 70) and colours (group 62). */
  layers?: [name: string, flags: number, colour: number][];
}

export function dxf(entities: Groups, { units, blocks = {}, layers = [] }: Around = {}): string {
  const header: Groups = units === undefined ? [9, '$ACADVER', 1, 'AC1015'] : [9, '$INSUNITS', 70, units];
  return text([
    ...section('HEADER', header),
    ...section('TABLES', [
      ...[0, 'TABLE', 2, 'LAYER', 70, layers.length],
      ...layers.flatMap(([name, flags, colour]) => [0, 'LAYER', 2, name, 70, flags, 62, colour]),
      ...[0, 'ENDTAB'],
    ]),
    ...section(
      'BLOCKS',
      Object.entries(blocks).flatMap(([name, inner]) => [
        ...[0, 'BLOCK', 8, '0', 2, name, 70, 0, 10, 1, 20, 2],
        ...inner,
        ...[0, 'ENDBLK'],
      ]),
    ),
    ...section('ENTITIES', entities),
    ...[0, 'EOF'],
  ]);
}

const section = (name: string, inner: Groups): Groups => [0, 'SECTION', 2, name, ...inner, 0, 'ENDSEC'];

function text(groups: Groups): string {
  const lines: string[] = [];
  for (let i = 0; i < groups.length; i += 2) lines.push(String(groups[i]).padStart(3), String(groups[i + 1]));
  return lines.join('\r\n') + '\r\n';
}
