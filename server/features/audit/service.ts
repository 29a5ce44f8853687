import type { Tx } from '../../db/client.ts';
import { auditEntries } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import type { LastSave } from '../../http/stale.ts';
import { findLastEntry } from './repo.ts';

export interface AuditNote {
  at: Date;
  siteId: number | null;
  /** Null for what Cupel does by itself; without an id where nobody is signed in. */
  actor: { id: Actor['id'] | null; name: string } | null;
  origin: Origin;
  action:
    | 'add'
    | 'change'
    | 'archive'
    | 'take-back'
    | 'remove'
    | 'commit'
    | 'undo'
    | 'propose'
    | 'decide'
    | 'start'
    | 'cancel'
    | 'sign-in'
    | 'sign-out'
    | 'ask-for-link'
    | 'set-password';
  entity: string;
  entityId: number | string;
  entityName: string;
  before?: Record<string, unknown> | null;
  after?: Record<string, unknown> | null;
  reason?: string;
}

/** Writes who did what, in the transaction of the change itself. */
export async function recordAudit(tx: Tx, note: AuditNote): Promise<void> {
  await tx.insert(auditEntries).values({
    at: note.at,
    siteId: note.siteId,
    personId: note.actor?.id ?? null,
    personName: note.actor?.name ?? 'Cupel',
    fromAddress: note.origin.fromAddress,
    action: note.action,
    entity: note.entity,
    entityId: String(note.entityId),
    entityName: note.entityName,
    before: note.before ?? null,
    after: note.after ?? null,
    reason: note.reason ?? '',
    requestId: note.origin.requestId,
  });
}

/** Who changed a thing last, for somebody who meant to change it too. */
export async function lastSaveOf(tx: Tx, entity: string, entityId: number): Promise<LastSave | null> {
  const entry = await findLastEntry(tx, entity, String(entityId));
  return entry && { savedBy: entry.personName, savedAt: entry.at.toISOString() };
}
