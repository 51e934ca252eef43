/** How the keyboard moves through a grid: arrows, Enter and Tab as in a spreadsheet. */
import type { KeyboardEvent } from 'react';

/** Where a cell stands on screen. */
export interface CellPosition {
  row: number;
  column: number;
}

type Control = HTMLInputElement | HTMLSelectElement;

const isText = (control: Control): control is HTMLInputElement =>
  control instanceof HTMLInputElement && control.type !== 'checkbox';

/** True when an arrow to that side would leave the text: the caret is at its end, or all of it is selected. */
function caretLeaves(control: Control, side: 'left' | 'right'): boolean {
  if (!isText(control)) return true;
  const { selectionStart, selectionEnd, value } = control;
  if (selectionStart === 0 && selectionEnd === value.length) return true;
  const edge = side === 'left' ? 0 : value.length;
  return selectionStart === edge && selectionEnd === edge;
}

/**
 * The cell to go to, or null when the key means something else. `origin` is the column where a run of Tabs began: Enter
 * goes back under it, so that rows can be typed one after another.
 */
export function nextCell(
  event: Pick<KeyboardEvent, 'key' | 'shiftKey' | 'altKey' | 'ctrlKey' | 'metaKey'>,
  control: Control,
  at: CellPosition,
  size: { rows: number; columns: number },
  origin: number | null,
): CellPosition | null {
  if (event.altKey || event.ctrlKey || event.metaKey) return null;
  const within = (row: number, column: number): CellPosition | null =>
    row >= 0 && row < size.rows && column >= 0 && column < size.columns ? { row, column } : null;
  switch (event.key) {
    case 'Enter':
      return within(at.row + (event.shiftKey ? -1 : 1), event.shiftKey ? at.column : (origin ?? at.column));
    case 'ArrowDown':
      return control instanceof HTMLSelectElement ? null : within(at.row + 1, at.column);
    case 'ArrowUp':
      return control instanceof HTMLSelectElement ? null : within(at.row - 1, at.column);
    case 'ArrowLeft':
      return !event.shiftKey && caretLeaves(control, 'left') ? within(at.row, at.column - 1) : null;
    case 'ArrowRight':
      return !event.shiftKey && caretLeaves(control, 'right') ? within(at.row, at.column + 1) : null;
    default:
      return null;
  }
}
