import type { Context } from '../../context.ts';
import { requeueLostMails } from '../mail/requeue.ts';
import { composeDigests } from './digests.ts';
import { decideNotices } from './notices.ts';
import { syncDuties } from './service.ts';

/**
 * Every ten minutes: opens and moves duties, decides who is told of what, writes the digests whose time has come, and
 * finds mails whose sending was lost. Each step finds its work anew, so a lost run or a second one changes nothing.
 */
export async function remind(context: Context): Promise<void> {
  await syncDuties(context);
  await decideNotices(context);
  await composeDigests(context);
  await requeueLostMails(context);
}
