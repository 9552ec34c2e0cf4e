/** A progress line on standard error, for people only: nothing is written unless it is a terminal. */

const WIDTH = 30;
/** Shown again after so much more of the input. */
const STEP = 1 / 200;

export type Progress = {
  /** The same chunks, counted on their way. */
  readonly counted: AsyncIterable<Uint8Array | string>;
  /** Takes the line away, before something else is printed and at the end. */
  readonly clear: () => void;
};

/** Follows how much of an input of known size has been read. */
export function followProgress(chunks: AsyncIterable<Uint8Array | string>, bytes: number | null): Progress {
  const { stderr } = process;
  if (!stderr.isTTY || bytes === null || bytes === 0) return { counted: chunks, clear: () => {} };
  const show = (share: number) => {
    const full = Math.round(share * WIDTH);
    const percent = (share * 100).toFixed(0);
    stderr.write(`\r[${"=".repeat(full)}${" ".repeat(WIDTH - full)}] ${percent} % of the data read`);
  };
  return { counted: count(chunks, bytes, show), clear: () => stderr.write("\r\u001b[K") };
}

async function* count(
  chunks: AsyncIterable<Uint8Array | string>,
  bytes: number,
  show: (share: number) => void,
): AsyncGenerator<Uint8Array | string, void, void> {
  let read = 0;
  let shown = 0;
  for await (const chunk of chunks) {
    yield chunk;
    read += chunk.length;
    const share = Math.min(1, read / bytes);
    if (share - shown < STEP) continue;
    shown = share;
    show(share);
  }
}
