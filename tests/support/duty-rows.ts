import { duties, type Duty } from '../../shared/contracts/duties.ts';

const example = duties['duties.mine'].example.rows[0]!;

/** An open duty as the server tells it; what a test cares about is given. Its dates follow `daysLate`. */
export function dutyRow(own: Partial<Duty> = {}): Duty {
  const daysLate = own.daysLate ?? example.daysLate;
  const due = new Date(Date.parse(`${example.today}T00:00:00Z`) - daysLate * 86_400_000);
  return { ...example, daysLate, dueOn: due.toISOString().slice(0, 10), ...own };
}
