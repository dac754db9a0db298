/** Which files a project text names. What is wrong with the project itself is for its reader to say. */

export function partFileIn(text: string): string | null {
  const file = (parsed(text) as { part?: { file?: unknown } } | null)?.part?.file;
  return typeof file === 'string' ? file : null;
}

/** Each drawing once, in the order of the drapes, and the netlist behind them. */
export function drawingFilesIn(text: string): string[] {
  const data = parsed(text) as { circuit?: { drapes?: unknown }; netlist?: unknown } | null;
  const drapes = data?.circuit?.drapes;
  const names = [
    ...(Array.isArray(drapes) ? drapes : []).map(
      (d: unknown) => (d as { drawing?: unknown } | null)?.drawing,
    ),
    data?.netlist,
  ];
  return [...new Set(names.filter((n): n is string => typeof n === 'string' && n !== ''))];
}

function parsed(text: string): unknown {
  try {
    return JSON.parse(text.charCodeAt(0) === 0xfeff ? text.slice(1) : text);
  } catch {
    return null;
  }
}
