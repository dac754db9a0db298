/** Head: the numbers of laser, lens and field, the material, and the depth of focus. */
import type { Project } from '../core/project/schema.ts';
import type { Quantity } from '../store/units.ts';
import { ChoiceField, NumberField, TickField } from './fields.tsx';
import { useLook, useWindow } from './window.tsx';

type Row = readonly [
  path: readonly (string | number)[],
  label: string,
  unit: string,
  quantity?: Quantity,
  min?: number,
];

const LENS: Row[] = [
  [['head', 'focalLength'], 'Focal length', 'mm', 'length', 0],
  [['head', 'field', 0], 'Field along X', 'mm', 'length', 0],
  [['head', 'field', 1], 'Field along Y', 'mm', 'length', 0],
  [['head', 'workingDistance'], 'Working distance', 'mm', 'length', 0],
  [['head', 'bodyDiameter'], 'Lens body diameter', 'mm', 'length', 0],
];
const BEAM: Row[] = [
  [['head', 'wavelength_nm'], 'Wavelength', 'nm', 'plain', 0],
  [['head', 'beamQuality'], 'Beam quality M²', '', 'plain', 0.999],
  [['head', 'beamDiameter'], 'Beam diameter', 'mm', 'length', 0],
  [['head', 'aperture'], 'Aperture', 'mm', 'length', 0],
  [['head', 'averagePower_W'], 'Average power', 'W', 'plain', 0],
  [['head', 'repetitionRate_kHz'], 'Repetition rate', 'kHz', 'plain', 0],
  [['head', 'pulseWidth_ns'], 'Pulse width', 'ns', 'plain', 0],
];
const MATERIAL: Row[] = [
  [['material', 'activationFluence'], 'Activation from', 'J/cm²', 'plain', 0],
  [['material', 'doseMargin'], 'Dose margin', '×', 'plain', 0.999],
  [['material', 'damageFluence'], 'Damage from', 'J/cm²', 'plain', 0],
];

export function HeadStep() {
  const { store } = useWindow();
  const project = useLook((s) => s.project);
  if (!project) return <p>Open a part first.</p>;
  const set = (path: readonly (string | number)[], what: string, value: unknown) =>
    store.act({ kind: 'set', path, what, value });
  const rows = (list: Row[]) =>
    list.map(([path, label, unit, quantity = 'plain', min]) => (
      <NumberField
        key={label}
        label={label}
        unit={unit}
        quantity={quantity}
        digits={4}
        value={valueAt(project, path)}
        {...(min === undefined ? {} : { min, open: true })}
        onValue={(v) => set(path, label.toLowerCase(), v)}
      />
    ));
  const depth = project.limits.depth;
  return (
    <>
      <h3>Lens and field</h3>
      {rows(LENS)}
      {(['X', 'Y'] as const).map((axis, k) => (
        <div key={axis}>
          <TickField
            label={`Telecentric along ${axis}`}
            value={project.head.pivot[k] === null}
            onValue={(on) =>
              set(
                ['head', 'pivot', k],
                `pivot along ${axis}`,
                on ? null : Math.round(project.head.workingDistance * 1.15),
              )
            }
          />
          {project.head.pivot[k] !== null && (
            <NumberField
              label={`Pivot height along ${axis}`}
              unit="mm"
              quantity="length"
              value={project.head.pivot[k]!}
              min={project.head.workingDistance}
              open
              onValue={(v) => set(['head', 'pivot', k], `pivot along ${axis}`, v)}
            />
          )}
        </div>
      ))}
      <h3>Beam</h3>
      {rows(BEAM)}
      <h3>Material</h3>
      {rows(MATERIAL)}
      <h3>Depth of focus</h3>
      <ChoiceField
        label="Set by"
        value={depth.mode}
        options={[
          ['distance', 'a distance I measured'],
          ['spot', 'growth of the spot'],
          ['dose', 'the dose window'],
        ]}
        onValue={(mode) =>
          set(
            ['limits', 'depth'],
            'depth of focus',
            mode === 'distance' ? { mode, halfDepth: 2 } : mode === 'spot' ? { mode, growth: 1.5 } : { mode },
          )
        }
      />
      {depth.mode === 'distance' && (
        <NumberField
          label="Half-depth"
          unit="mm"
          quantity="length"
          value={depth.halfDepth}
          min={project.limits.heightUncertainty}
          open
          onValue={(v) => set(['limits', 'depth', 'halfDepth'], 'half-depth', v)}
        />
      )}
      {depth.mode === 'spot' && (
        <NumberField
          label="Allowed growth"
          unit="×"
          value={depth.growth}
          min={1}
          open
          onValue={(v) => set(['limits', 'depth', 'growth'], 'growth of the spot', v)}
        />
      )}
      <NumberField
        label="Height uncertainty"
        unit="mm"
        quantity="length"
        value={project.limits.heightUncertainty}
        min={0}
        onValue={(v) => set(['limits', 'heightUncertainty'], 'height uncertainty', v)}
      />
    </>
  );
}

const valueAt = (project: Project, path: readonly (string | number)[]): number =>
  path.reduce<unknown>((v, k) => (v as Record<string | number, unknown>)[k], project) as number;
