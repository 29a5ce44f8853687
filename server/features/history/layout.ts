import type { FieldProblem } from '../../../shared/contracts/errors.ts';
import type { HistoryLayout } from '../../../shared/contracts/history.ts';
import { invalidInput } from '../../http/parse.ts';
import type { ImportTag } from './repo.ts';

/**
 * Refuses a layout that doesn't fit the file or the site, naming each field at fault.
 * @throws AppError 'invalid-input'
 */
export function refuseLayout(
  layout: HistoryLayout,
  header: readonly string[],
  tags: readonly ImportTag[],
): void {
  const problems = [...columnsBeyond(layout, header), ...columnsTwice(layout), ...foreignTags(layout, tags)];
  if (problems.length > 0) throw invalidInput(problems);
}

/** Every column that the layout names, with the path of its field. */
function namedColumns(layout: HistoryLayout): { path: string; column: number }[] {
  const time = { path: 'layout.timeColumn', column: layout.timeColumn };
  if (layout.shape === 'wide') {
    return [
      time,
      ...layout.columns.map(({ column }, index) => ({ path: `layout.columns.${index}.column`, column })),
    ];
  }
  const quality =
    layout.qualityColumn === null ? [] : [{ path: 'layout.qualityColumn', column: layout.qualityColumn }];
  return [
    time,
    { path: 'layout.tagColumn', column: layout.tagColumn },
    { path: 'layout.valueColumn', column: layout.valueColumn },
    ...quality,
  ];
}

function columnsBeyond(layout: HistoryLayout, header: readonly string[]): FieldProblem[] {
  return namedColumns(layout)
    .filter(({ column }) => column >= header.length)
    .map(({ path, column }) => ({
      path,
      message: `The file has ${header.length} columns; column ${column + 1} is not there.`,
    }));
}

function columnsTwice(layout: HistoryLayout): FieldProblem[] {
  const named = namedColumns(layout);
  return named
    .filter(({ column }, index) => named.findIndex((other) => other.column === column) < index)
    .map(({ path, column }) => ({
      path,
      message: `Column ${column + 1} can hold only one thing. Choose another.`,
    }));
}

function foreignTags(layout: HistoryLayout, tags: readonly ImportTag[]): FieldProblem[] {
  if (layout.shape === 'long') return [];
  const known = new Set(tags.map(({ id }) => id));
  const ids = layout.columns.map(({ tagId }) => tagId);
  return ids.flatMap((id, index) => {
    const path = `layout.columns.${index}.tagId`;
    if (!known.has(id)) return [{ path, message: 'This tag is not one of the site. Choose another.' }];
    if (ids.indexOf(id) < index)
      return [{ path, message: 'Another column goes to this tag already. Choose one of them.' }];
    return [];
  });
}
