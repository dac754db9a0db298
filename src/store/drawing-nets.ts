/** Nets of a drawing by its own names: what the project says, and what counts where it says nothing. */
import type { Drape } from '../core/project/schema.ts';
import type { FlatPicture } from '../worker/pictures.ts';

export interface NetName {
  kind: 'shape' | 'layer';
  /** Id of a shape in the drawing, or a layer of it. */
  name: string;
  /** What the project says; '' where it says nothing. */
  given: string;
  /** What counts where the project says nothing for it: its layer's net, or the one in the file. */
  otherwise: string;
}

/** Layers with a name first, then the shapes with a name, each once, in the drawing's order. */
export function netNames({ nets }: Pick<Drape, 'nets'>, flat: FlatPicture): NetName[] {
  const layers = new Map<string, NetName>();
  const shapes = new Map<string, NetName>();
  flat.shapes.forEach(({ name, layer, net }, i) => {
    if (flat.ids[i] === null) return;
    if (layer !== '' && !layers.has(layer))
      layers.set(layer, { kind: 'layer', name: layer, given: nets[layer] ?? '', otherwise: '' });
    if (name !== null && !shapes.has(name))
      shapes.set(name, {
        kind: 'shape',
        name,
        given: nets[name] ?? '',
        otherwise: nets[layer] ?? net ?? '',
      });
  });
  // A layer and a shape of one name share what the project says of that name.
  return [...[...layers.values()].filter((l) => !shapes.has(l.name)), ...shapes.values()];
}

/** The nets of a drape with another one for a name; an empty one takes the name out. */
export function withNet(nets: Drape['nets'], name: string, net: string): Drape['nets'] {
  const { [name]: _, ...others } = nets;
  return net.trim() === '' ? others : { ...others, [name]: net.trim() };
}
