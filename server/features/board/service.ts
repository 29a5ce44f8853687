import { format, subMonths } from 'date-fns';
import type { Role } from '../../../shared/contracts/access.ts';
import type { Board } from '../../../shared/contracts/board.ts';
import type { Context } from '../../context.ts';
import type { Actor } from '../../http/request.ts';
import { countChosen } from './chosen.ts';
import { lastLook } from './look.ts';
import { type BoardFilter, countBySite, worstFirst } from './repo.ts';
import { waitingFor } from './waiting.ts';

const monthsShown = 12;

/** The board: counts, months, what waits, worst first. It reads what judging wrote and judges nothing itself. */
export async function readBoard(
  context: Context,
  actor: Actor,
  query: Omit<BoardFilter, 'person'>,
): Promise<Board> {
  const now = context.clock();
  const since = format(subMonths(now, monthsShown - 1), 'yyyy-MM');
  const sitesAs = (role: Role) => actor.roles.filter((held) => held.role === role).map((held) => held.siteId);
  const person = { id: actor.id, managed: sitesAs('manager'), edited: sitesAs('engineer') };
  const filter = { ...query, person };
  const [bySite, chosen, rows, waiting, looked] = await Promise.all([
    countBySite(context.db, filter, since, now),
    countChosen(context.db, filter),
    worstFirst(context.db, filter),
    waitingFor(context.db, filter, now),
    lastLook(context.db, actor.id, now),
  ]);
  const sum = (name: keyof Board['counts']) => bySite.reduce((total, site) => total + site[name], 0);
  return {
    counts: {
      total: sum('total'),
      fit: sum('fit'),
      watch: sum('watch'),
      unfit: sum('unfit'),
      unproven: sum('unproven'),
      unfitInClosedLoop: sum('unfitInClosedLoop'),
      notInService: sum('notInService'),
      stopped: sum('stopped'),
      overdue: sum('overdue'),
      unowned: sum('unowned'),
    },
    sites: bySite.map(({ unfitInClosedLoop, notInService, overdue, unowned, ...site }) => site),
    ...chosen,
    rows,
    waiting,
    lookedAt: looked?.toISOString() ?? null,
    at: now.toISOString(),
  };
}
