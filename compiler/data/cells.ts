/**
 * The cell of a number. Decimal numbers with a point, nothing else: what could be read in two ways, a decimal comma or a
 * separator of thousands, is a fault with a hint and never a guess. Empty and `NaN` are missing; `inf` and `infinity`, either sign, and
 * what is too large for a double are infinite, which the end letters own. Linear in the length of the cell.
 */
import { quoted } from "./data-problem.ts";

/** Where the cell holds a number or nothing: that; else what is wrong and how to mend it. */
export type NumberCell =
  | { readonly value: number | null }
  | { readonly value?: undefined; readonly what: string; readonly hint: string };

const DECIMAL = /^[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?$/;

/** The number of a cell without space around it. */
export function numberCell(cell: string): NumberCell {
  if (cell === "") return { value: null };
  if (DECIMAL.test(cell)) return { value: Number(cell) };
  const word = cell.length <= 9 ? cell.toLowerCase() : "";
  if (word === "nan") return { value: null };
  if (/^[+-]?inf(inity)?$/.test(word)) return { value: word.startsWith("-") ? -Infinity : Infinity };
  return { what: `${quoted(cell)} is not a decimal number`, hint: hintFor(cell) };
}

function hintFor(cell: string): string {
  if (cell.length > 100) return "leave a missing value empty";
  const grouped = /^[+-]?[0-9]{1,3}(?:[,'’_\s][0-9]{3})+(?:\.[0-9]*)?$/.test(cell);
  const comma = /^[+-]?[0-9]*,[0-9]+$/.test(cell);
  const joined = cell.replace(/[,'’_\s]/g, "");
  if (grouped && comma) {
    return `if the comma is the decimal point, write ${cell.replace(",", ".")}; if it separates thousands, write ${joined}`;
  }
  if (grouped) return `thousands are not separated: write ${joined}`;
  if (comma) return `decimals follow a point: write ${cell.replace(",", ".")}`;
  if (/^[+-]?[0-9]{1,3}(?:\.[0-9]{3})*,[0-9]+$/.test(cell)) {
    return `decimals follow a point and thousands are not separated: write ${cell.replaceAll(".", "").replace(",", ".")}`;
  }
  if (/^[+-]?0[xbo][0-9a-f]+$/i.test(cell)) return "write it in decimal";
  const unit = /^([+-]?[0-9]+(?:\.[0-9]+)?)\s*[^\s0-9.,].*$/.exec(cell);
  if (unit) return `write the number alone: ${unit[1]}`;
  return "write a number such as 12.5 or 1e-3; leave a missing value empty, or write NaN";
}
