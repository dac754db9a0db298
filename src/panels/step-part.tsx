/** Part: what was read, its unit, and how it stands on the bench. */
import type { Pose } from '../core/base/pose.ts';
import { setupsOf } from '../store/store.ts';
import { turned } from '../store/turns.ts';
import { show } from '../store/units.ts';
import { ChoiceField, Fact, NumberField } from './fields.tsx';
import { useLook, useWindow } from './window.tsx';

export function PartStep() {
  const { store, run } = useWindow();
  const project = useLook((s) => s.project);
  const part = useLook((s) => s.part);
  const at = useLook((s) => s.setup);
  if (!project)
    return (
      <>
        <p>Open an STL part, or a project made earlier. Both can be dropped on the window.</p>
        <p className="row">
          <button type="button" onClick={() => run('open')}>
            Open…
          </button>
          <button type="button" onClick={() => run('demo')}>
            Demonstration
          </button>
        </p>
      </>
    );
  const setup = setupsOf(project)[at]!;
  const pose = (next: Pose, what: string) =>
    store.act({ kind: 'set', path: ['setups', at, 'pose'], what, value: next });
  const move = (k: number, v: number) =>
    pose(
      { ...setup.pose, move: setup.pose.move.map((m, i) => (i === k ? v : m)) as unknown as Pose['move'] },
      'place on the bench',
    );
  const fixed = project.setups === 'auto';
  return (
    <>
      <dl>
        <Fact label="File">{project.part.file}</Fact>
        {part && (
          <>
            <Fact label="Triangles">{part.triangles.toLocaleString('en')}</Fact>
            <Fact label="Surface">
              {show(part.area, 0)} mm², {part.closed ? 'closed' : 'open'}
            </Fact>
            {part.pieces > 1 && <Fact label="Pieces">{part.pieces}</Fact>}
            <Fact label="Mended">{mendedWords(part.mended)}</Fact>
          </>
        )}
      </dl>
      <ChoiceField
        label="Unit of the file"
        value={project.part.units}
        onValue={(v) =>
          store.act({ kind: 'set', path: ['part', 'units'], what: 'unit of the part', value: v })
        }
        options={[
          ['mm', 'millimetre'],
          ['cm', 'centimetre'],
          ['m', 'metre'],
          ['um', 'micrometre'],
          ['inch', 'inch'],
        ]}
      />
      <h3>On the bench, mm</h3>
      {setupsOf(project).length > 1 && (
        <ChoiceField
          label="Setup"
          value={String(at)}
          onValue={(v) => store.setSetup(Number(v))}
          options={setupsOf(project).map((s, i) => [String(i), s.name] as const)}
        />
      )}
      {fixed ? (
        <p>The planner chooses how the part stands.</p>
      ) : (
        <>
          <div className="three">
            {(['X', 'Y', 'Z'] as const).map((name, k) => (
              <NumberField
                key={name}
                label={`Move ${name}`}
                value={setup.pose.move[k]!}
                unit="mm"
                quantity="length"
                onValue={(v) => move(k, v)}
              />
            ))}
          </div>
          <p className="row">
            {(['X', 'Y', 'Z'] as const).map((name, k) => (
              <button
                key={name}
                type="button"
                onClick={() => pose(turned(setup.pose, k, 90), `turn about ${name}`)}
              >
                Turn 90° about {name}
              </button>
            ))}
          </p>
        </>
      )}
    </>
  );
}

function mendedWords(m: {
  welded: number;
  degenerate: number;
  duplicate: number;
  flipped: number;
  split: number;
  nonManifoldEdges: number;
}): string {
  const told = [
    [m.welded, 'vertices joined'],
    [m.degenerate, 'facets of no area left out'],
    [m.duplicate, 'double facets left out'],
    [m.flipped, 'facets turned over'],
    [m.split, 'border edges split at a corner on them'],
    [m.nonManifoldEdges, 'edges that more than two facets share'],
  ].filter(([n]) => (n as number) > 0);
  return told.length ? told.map(([n, w]) => `${n} ${w}`).join(', ') : 'nothing';
}
