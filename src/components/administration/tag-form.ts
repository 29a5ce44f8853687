import type { Tag } from '../../../shared/contracts/tags.ts';
import { numberText, readNumber } from '../register/number-text.ts';

/** A tag as it is typed: the range as texts, so that nothing is lost while it can't be read yet. */
export interface TagForm {
  name: string;
  description: string;
  unit: string;
  unitId: number | null;
  rangeLow: string;
  rangeHigh: string;
  archived: boolean;
}

export const blankTag: TagForm = {
  name: '',
  description: '',
  unit: '',
  unitId: null,
  rangeLow: '',
  rangeHigh: '',
  archived: false,
};

export const tagLabels: Record<keyof TagForm, string> = {
  name: 'Tag',
  description: 'Description',
  unit: 'Engineering unit',
  unitId: 'Unit of plant',
  rangeLow: 'Range from',
  rangeHigh: 'Range to',
  archived: 'Archived',
};

export function toTagForm(tag: Tag): TagForm {
  return {
    name: tag.name,
    description: tag.description,
    unit: tag.unit,
    unitId: tag.unitId,
    rangeLow: numberText(tag.rangeLow),
    rangeHigh: numberText(tag.rangeHigh),
    archived: tag.archivedAt !== null,
  };
}

/** Sentences for what can't be read as a number. */
export function checkTagForm(form: TagForm): Record<string, string> {
  const errors: Record<string, string> = {};
  for (const field of ['rangeLow', 'rangeHigh'] as const) {
    const read = readNumber(form[field]);
    if ('wrong' in read) errors[field] = read.wrong;
  }
  return errors;
}

/** What is sent of a form that was found in order. */
export function tagBody({ rangeLow, rangeHigh, archived: _archived, ...texts }: TagForm) {
  const value = (text: string): number | null => {
    const read = readNumber(text);
    return 'value' in read ? read.value : null;
  };
  return { ...texts, rangeLow: value(rangeLow), rangeHigh: value(rangeHigh) };
}
