/** Inputs that take units, say what is wrong beside themselves, and give a value only when it can be used. */
import { type ReactNode, useEffect, useId, useState } from 'react';
import { type Quantity, readNumber, show } from '../store/units.ts';

interface NumberProps {
  label: string;
  value: number;
  /** Shown behind the number; may be typed. */
  unit: string;
  quantity?: Quantity;
  digits?: number;
  min?: number;
  max?: number;
  /** The bound itself is allowed; true by default. */
  open?: boolean;
  compact?: boolean;
  onValue(value: number): void;
}

export function NumberField({
  label,
  value,
  unit,
  quantity = 'plain',
  digits = 3,
  min,
  max,
  open = false,
  compact = false,
  onValue,
}: NumberProps) {
  const id = useId();
  const plain = show(value, digits).replace('−', '-');
  const [text, setText] = useState(plain);
  const [problem, setProblem] = useState('');
  useEffect(() => {
    setText(plain);
    setProblem('');
  }, [plain]);

  function take() {
    if (text === plain) return setProblem('');
    const typed = readNumber(text, quantity, unit);
    if ('problem' in typed) return setProblem(typed.problem);
    const v = typed.value;
    if (min !== undefined && (open ? v <= min : v < min))
      return setProblem(`${open ? 'more than' : 'at least'} ${show(min)} ${unit}`);
    if (max !== undefined && (open ? v >= max : v > max))
      return setProblem(`${open ? 'less than' : 'at most'} ${show(max)} ${unit}`);
    setProblem('');
    setText(show(v, digits).replace('−', '-'));
    onValue(v);
  }

  return (
    <div className={compact ? 'field compact' : 'field'}>
      <label htmlFor={id}>{label}</label>
      <span className="entry">
        <input
          id={id}
          inputMode="decimal"
          autoComplete="off"
          value={text}
          aria-invalid={problem !== ''}
          aria-describedby={problem ? `${id}-problem` : undefined}
          onChange={(e) => setText(e.target.value)}
          onBlur={take}
          onKeyDown={(e) => {
            if (e.key === 'Enter') take();
            if (e.key === 'Escape') {
              setText(plain);
              setProblem('');
              e.stopPropagation();
            }
          }}
        />
        {unit && <span className="unit">{unit}</span>}
      </span>
      {problem && (
        <span className="wrong" id={`${id}-problem`} role="alert">
          {problem}
        </span>
      )}
    </div>
  );
}

export function TextField({
  label,
  value,
  placeholder,
  onValue,
}: {
  label: string;
  value: string;
  placeholder?: string;
  onValue(v: string): void;
}) {
  const id = useId();
  const [text, setText] = useState(value);
  useEffect(() => setText(value), [value]);
  const take = () => text !== value && onValue(text);
  return (
    <div className="field">
      <label htmlFor={id}>{label}</label>
      <span className="entry">
        <input
          id={id}
          autoComplete="off"
          placeholder={placeholder}
          value={text}
          onChange={(e) => setText(e.target.value)}
          onBlur={take}
          onKeyDown={(e) => e.key === 'Enter' && take()}
        />
      </span>
    </div>
  );
}

export function ChoiceField<T extends string>({
  label,
  value,
  options,
  onValue,
}: {
  label: string;
  value: T;
  options: readonly (readonly [T, string])[];
  onValue(v: T): void;
}) {
  const id = useId();
  return (
    <div className="field">
      <label htmlFor={id}>{label}</label>
      <span className="entry">
        <select id={id} value={value} onChange={(e) => onValue(e.target.value as T)}>
          {options.map(([v, words]) => (
            <option key={v} value={v}>
              {words}
            </option>
          ))}
        </select>
      </span>
    </div>
  );
}

export function TickField({
  label,
  value,
  onValue,
}: {
  label: string;
  value: boolean;
  onValue(v: boolean): void;
}) {
  const id = useId();
  return (
    <div className="field tick">
      <input id={id} type="checkbox" checked={value} onChange={(e) => onValue(e.target.checked)} />
      <label htmlFor={id}>{label}</label>
    </div>
  );
}

/** A place of the part, mm. */
export function PlaceField({
  label,
  at,
  onPlace,
}: {
  label: string;
  at: readonly [number, number, number];
  onPlace(at: [number, number, number]): void;
}) {
  return (
    <div className="three">
      {(['X', 'Y', 'Z'] as const).map((axis, k) => (
        <NumberField
          key={axis}
          label={`${label} ${axis}`}
          unit=""
          quantity="length"
          value={at[k]!}
          onValue={(v) => onPlace(at.map((a, i) => (i === k ? v : a)) as [number, number, number])}
        />
      ))}
    </div>
  );
}

export function Fact({ label, children }: { label: string; children: ReactNode }) {
  return (
    <div className="fact">
      <dt>{label}</dt>
      <dd>{children}</dd>
    </div>
  );
}
