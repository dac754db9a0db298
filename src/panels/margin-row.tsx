/** One margin: its number, its limit, a bar, and the way to the worst place. */
import type { Margin } from '../store/margins.ts';
import { show } from '../store/units.ts';

export function MarginRow({ margin: m, onShow }: { margin: Omit<Margin, 'check' | 'at'>; onShow(): void }) {
  const share = Math.max(0, Math.min(1, m.share));
  return (
    <div className={m.ok ? 'margin' : 'margin bad'}>
      <span className="margin-head">
        <span className="margin-name">
          {m.ok ? '' : '✕ '}
          {m.label}
        </span>
        <span className="margin-value">
          {show(m.value, 2)}{' '}
          <span className="dim">
            of {show(m.limit, 2)} {m.unit}
          </span>
        </span>
      </span>
      <span className="bar" aria-hidden="true">
        <span style={{ width: `${100 * share}%` }} />
      </span>
      <button type="button" onClick={onShow} aria-label={`Show me where: ${m.label}`}>
        Show me
      </button>
    </div>
  );
}
