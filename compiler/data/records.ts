/**
 * Bytes to records: chunks of UTF-8 in, batches of rows of cells out, each with the line it begins on. Streaming: at most a
 * slice of 64 KiB and one record are held at a time, whatever the size of the file and of its chunks, and the next chunk
 * is asked for when the last one's records have been taken. Where a fault is found the records before it come first.
 *
 * csv-parse splits cells (RFC 4180 quoting; lines end in LF, CRLF or CR; space around an unquoted cell is dropped). Lines are
 * counted here: csv-parse counts a CRLF within quotes twice. So is the length of a record: it counts cells, not separators.
 */
import { CsvError, type Parser, parse } from "csv-parse";
import { type DataProblem, quoted } from "./data-problem.ts";

export type RawRecord = { readonly cells: readonly string[]; readonly line: number };

/** Records, or the fault that ends them; its row is not known here. */
export type Batch =
  | { readonly records: readonly RawRecord[]; readonly fault?: undefined }
  | { readonly records?: undefined; readonly fault: Fault };
export type Fault = Pick<DataProblem, "code" | "what" | "hint"> & { readonly line: number };

const SLICE_BYTES = 65536;
/** See `flush`. */
const FLUSH = "    ";

/** What is wrong, before the line is known. */
type Wrong = Pick<DataProblem, "code" | "what" | "hint">;

/** The parser, what it has found since the last batch, and where it is. */
type Reading = {
  readonly parser: Parser;
  found: RawRecord[];
  /** The line on which the record in progress begins. */
  line: number;
  /** Bytes of text up to the end of the last record, and up to the end of the last slice. */
  recordEnd: number;
  fed: number;
  /** Whether the text so far ends within quotes. */
  quoted: boolean;
  wrong: Wrong | null;
};

export async function* readRecords(
  chunks: AsyncIterable<Uint8Array | string>,
  mostRecordBytes: number,
): AsyncGenerator<Batch, void, void> {
  const reading = open(mostRecordBytes);
  const text = textReader();
  try {
    for await (const chunk of chunks) {
      const bytes = typeof chunk === "string" ? new TextEncoder().encode(chunk) : chunk;
      for (let at = 0; at < bytes.length; at += SLICE_BYTES) {
        const slice = bytes.subarray(at, at + SLICE_BYTES);
        const { good, wrong } = text.read(slice);
        await feed(reading, good, slice.length, mostRecordBytes);
        if (wrong !== null || endsRow(reading, good)) await flush(reading);
        yield* taken(reading, wrong);
        if (reading.wrong ?? wrong) return;
      }
    }
    const wrong = text.end();
    if (wrong === null) await finish(reading);
    else await flush(reading);
    yield* taken(reading, wrong);
  } finally {
    reading.parser.destroy();
  }
}

function open(mostRecordBytes: number): Reading {
  const parser = parse({
    record_delimiter: ["\r\n", "\n", "\r"],
    relax_column_count: true,
    trim: true,
    max_record_size: 0,
  });
  const reading: Reading = { parser, found: [], line: 1, recordEnd: 0, fed: 0, quoted: false, wrong: null };
  // Taken here, records are neither queued nor lost to an error after them, and the parser's place is theirs. The parser's
  // own hook, `on_record`, copies its whole state for each record: that took 2.5 times as long in all.
  parser.push = (cells: string[] | null) => {
    if (cells === null || reading.wrong !== null) return true;
    const { bytes } = parser.info;
    if (bytes - reading.recordEnd > mostRecordBytes) {
      reading.wrong = tooLong(mostRecordBytes);
      return true;
    }
    reading.found.push({ cells, line: reading.line });
    reading.line += 1 + breaksWithin(cells);
    reading.recordEnd = bytes;
    return true;
  };
  // Told to whoever wrote the text; here only so that it is not thrown as well.
  parser.on("error", () => {});
  return reading;
}

function breaksWithin(cells: readonly string[]): number {
  let breaks = 0;
  for (const cell of cells) {
    if (cell.includes("\n") || cell.includes("\r")) breaks += cell.match(/\r\n|\n|\r/g)?.length ?? 0;
  }
  return breaks;
}

/** Has the parser read a slice; its records are in `found` afterwards. */
async function feed(reading: Reading, text: string, bytes: number, mostRecordBytes: number): Promise<void> {
  await write(reading, text);
  reading.fed += bytes;
  if (reading.fed - reading.recordEnd > mostRecordBytes + SLICE_BYTES) {
    reading.wrong ??= tooLong(mostRecordBytes);
  }
}

/**
 * The parser looks three bytes ahead before it gives a record away. Space gets the last one out of it: for a live stream,
 * whose next row may be long in coming, and for the rows before a fault. Before a row, space changes nothing.
 */
async function flush(reading: Reading): Promise<void> {
  if (reading.wrong !== null) return;
  await write(reading, FLUSH);
  reading.recordEnd += FLUSH.length;
  reading.fed += FLUSH.length;
}

async function write(reading: Reading, text: string): Promise<void> {
  await new Promise<void>((resolve) => {
    reading.parser.write(text, (error) => resolve(noteError(reading, error)));
  });
}

/** Whether a slice ends with the end of a row, and not within quotes. */
function endsRow(reading: Reading, text: string): boolean {
  for (let at = text.indexOf('"'); at !== -1; at = text.indexOf('"', at + 1))
    reading.quoted = !reading.quoted;
  return text.endsWith("\n") && !reading.quoted;
}

async function finish(reading: Reading): Promise<void> {
  await new Promise<void>((resolve) => {
    reading.parser.end((error?: Error | null) => resolve(noteError(reading, error)));
  });
}

function noteError(reading: Reading, error: Error | null | undefined): void {
  if (error) reading.wrong ??= wrongOf(error);
}

/** What has been found since the last batch, and the fault after it. */
function* taken(reading: Reading, wrong: Wrong | null): Generator<Batch, void, void> {
  const { found } = reading;
  reading.found = [];
  if (found.length > 0) yield { records: found };
  const fault = reading.wrong ?? wrong;
  if (fault !== null) yield { fault: { ...fault, line: reading.line } };
}

function tooLong(mostRecordBytes: number): Wrong {
  return {
    code: "data_record_long",
    what: `a row is longer than ${mostRecordBytes} bytes`,
    hint: "look for a quote that is opened and not closed, or for line ends that are missing",
  };
}

function wrongOf(error: unknown): Wrong {
  const code = error instanceof CsvError ? error.code : undefined;
  const hint = 'a cell with a comma, a quote or a line break stands in quotes: "a ""b"", c"';
  switch (code) {
    case "CSV_QUOTE_NOT_CLOSED":
      return { code: "data_quote", what: "a quote is opened and never closed", hint };
    case "INVALID_OPENING_QUOTE":
      return { code: "data_quote", what: "a quote stands in the middle of a cell that is not quoted", hint };
    case "CSV_INVALID_CLOSING_QUOTE":
    case "CSV_NON_TRIMABLE_CHAR_AFTER_CLOSING_QUOTE":
      return { code: "data_quote", what: "after the closing quote of a cell the cell goes on", hint };
    default:
      return { code: "data_quote", what: `the row cannot be read: ${quoted(String(error))}`, hint };
  }
}

const ENCODING_HINT =
  "save the table as CSV in UTF-8; it may be in UTF-16, in a code page such as Windows-1252, or a spreadsheet's own file";
const NUL: Wrong = {
  code: "data_encoding",
  what: "there is a NUL character in this row",
  hint: ENCODING_HINT,
};
const NOT_UTF8: Wrong = {
  code: "data_encoding",
  what: "there are bytes in this row that are not UTF-8",
  hint: ENCODING_HINT,
};

type TextReader = {
  /** The text of a slice, or of what stands before its first fault. */
  readonly read: (bytes: Uint8Array) => { readonly good: string; readonly wrong: Wrong | null };
  readonly end: () => Wrong | null;
};

/** Decodes slices of UTF-8; a mark of byte order in front is dropped. */
function textReader(): TextReader {
  const strict = new TextDecoder("utf-8", { fatal: true });
  // Goes the same way as the strict one, and can still say what stood before a fault when that has thrown.
  const lenient = new TextDecoder("utf-8");
  const accepts = (bytes?: Uint8Array): boolean => {
    try {
      strict.decode(bytes, { stream: bytes !== undefined });
      return true;
    } catch {
      return false;
    }
  };
  return {
    read: (bytes) => {
      const nul = bytes.indexOf(0);
      const clean = nul === -1 ? bytes : bytes.subarray(0, nul);
      const text = lenient.decode(clean, { stream: true });
      if (accepts(clean)) return { good: text, wrong: nul === -1 ? null : NUL };
      const fault = text.indexOf("\uFFFD");
      return { good: fault === -1 ? text : text.slice(0, fault), wrong: NOT_UTF8 };
    },
    end: () => (accepts() ? null : NOT_UTF8),
  };
}
