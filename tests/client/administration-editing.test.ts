import { describe, expect, it } from 'vitest';
import { ApiProblem } from '../../src/api/problem.ts';
import { mergeVersions, takeSides } from '../../src/components/administration/merge-versions.ts';
import { useEditing } from '../../src/components/administration/use-editing.ts';

interface Row {
  name: string;
  zone: string;
  version: number;
}
type Fields = Omit<Row, 'version'>;
const fieldsOf = ({ name, zone }: Row): Fields => ({ name, zone });
const row: Row = { name: 'Tarnby', zone: 'UTC', version: 1 };

const refusal = (code: string, status: number, more: object): ApiProblem =>
  new ApiProblem({ type: '', title: 'No', status, detail: 'Not so.', code, ...more });
const stale = (current: object) => refusal('stale', 409, { current });

/** A form whose saves are answered in turn by what is given: a row, or a refusal. */
function form(answers: (Row | Error)[], begin: Row | null = row) {
  const sent: [Fields, number | null][] = [];
  const saved: Row[] = [];
  const editing = useEditing<Fields, Row>({
    row: begin,
    blank: { name: '', zone: 'UTC' },
    fieldsOf,
    check: ({ name }): Record<string, string> => (name === 'no' ? { name: 'Not this name.' } : {}),
    async save(fields, version) {
      sent.push([fields, version]);
      const answer = answers.shift()!;
      if (answer instanceof Error) throw answer;
      return answer;
    },
    onSaved: (after) => saved.push(after),
  });
  return { ...editing, sent, saved };
}

describe('two versions of a thing', () => {
  const base = { name: 'A', zone: 'UTC', roles: [1] };

  it('are one where each person changed other fields', () => {
    const mine = { ...base, name: 'B' };
    const theirs = { ...base, roles: [1, 2] };
    expect(mergeVersions(base, mine, theirs)).toEqual({
      merged: { ...base, name: 'B', roles: [1, 2] },
      both: [],
    });
  });

  it('leave open what both changed to different values, and nothing else', () => {
    const mine = { ...base, name: 'B', zone: 'Asia/Tokyo' };
    const theirs = { ...base, name: 'C', zone: 'Asia/Tokyo' };
    const { merged, both } = mergeVersions(base, mine, theirs);
    expect(both).toEqual(['name']);
    expect(takeSides(merged, theirs, { name: 'theirs' })).toEqual(theirs);
    expect(takeSides(merged, theirs, { name: 'yours' })).toEqual(mine);
  });
});

describe('a form', () => {
  it('saves what was typed with the version it began from', async () => {
    const after = { ...row, name: 'Tarnby Works', version: 2 };
    const { form: typed, dirty, submit, sent, saved } = form([after]);
    expect(dirty.value).toBe(false);
    typed.value.name = 'Tarnby Works';
    expect(dirty.value).toBe(true);
    await submit();
    expect(sent).toEqual([[{ name: 'Tarnby Works', zone: 'UTC' }, 1]]);
    expect(saved).toEqual([after]);
  });

  it('sends nothing that can’t be used, and says why beside the field', async () => {
    const { form: typed, errors, submit, sent } = form([]);
    typed.value.name = 'no';
    await submit();
    expect(sent).toEqual([]);
    expect(errors.value).toEqual({ name: 'Not this name.' });
  });

  it('puts what the server says of a field beside it, anything else below', async () => {
    const fields = [{ path: 'name', message: 'Taken.' }];
    const first = form([refusal('conflict', 409, { fields })]);
    await first.submit();
    expect(first.errors.value).toEqual({ name: 'Taken.' });
    expect(first.otherError.value).toBeNull();
    const second = form([ApiProblem.offline(), row]);
    await second.submit();
    expect(second.otherError.value?.title).toBe('No connection');
    await second.submit();
    expect(second.otherError.value).toBeNull();
    expect(second.saved).toEqual([row]);
  });

  it('saves again by itself when somebody changed only other fields', async () => {
    const current = { ...row, zone: 'Asia/Tokyo', version: 2 };
    const after = { name: 'Mine', zone: 'Asia/Tokyo', version: 3 };
    const { form: typed, conflict, submit, sent, saved } = form([stale(current), after]);
    typed.value.name = 'Mine';
    await submit();
    expect(conflict.value).toBeNull();
    expect(sent[1]).toEqual([{ name: 'Mine', zone: 'Asia/Tokyo' }, 2]);
    expect(saved).toEqual([after]);
  });

  it('shows both sides of what both changed, with who saved, and saves the choice', async () => {
    const current = {
      ...row,
      name: 'Theirs',
      version: 4,
      savedBy: 'Jun Brightwell',
      savedAt: '2026-12-01T07:00:00.000Z',
    };
    const { form: typed, conflict, submit, keep, sent } = form([stale(current), row]);
    typed.value = { name: 'Mine', zone: 'Asia/Tokyo' };
    await submit();
    expect(conflict.value).toMatchObject({ both: ['name'], savedBy: 'Jun Brightwell', version: 4 });
    await keep({ name: 'theirs' });
    expect(sent[1]).toEqual([{ name: 'Theirs', zone: 'Asia/Tokyo' }, 4]);
    expect(conflict.value).toBeNull();
  });

  it('can give mine up for theirs', async () => {
    const {
      form: typed,
      conflict,
      dirty,
      submit,
      drop,
    } = form([stale({ ...row, name: 'Theirs', version: 2 })]);
    typed.value.name = 'Mine';
    await submit();
    drop();
    expect(typed.value.name).toBe('Theirs');
    expect(conflict.value).toBeNull();
    expect(dirty.value).toBe(false);
  });

  it('is not sent twice by a second click', async () => {
    const { submit, sent } = form([row, row]);
    await Promise.all([submit(), submit()]);
    expect(sent).toHaveLength(1);
  });

  it('of a new thing carries no version and never ends in a conflict', async () => {
    const { submit, sent, conflict, otherError } = form([stale(row)], null);
    await submit();
    expect(sent[0]![1]).toBeNull();
    expect(conflict.value).toBeNull();
    expect(otherError.value?.title).toBe('No');
  });
});
