import { keepPreviousData, useQuery } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { AuditEntry } from '../../shared/contracts/audit.ts';
import { call } from '../api/call.ts';

export interface AuditFilter {
  text: string;
  siteId: string;
  entity: string;
  entityId: string;
}

/** One page of who did what, newest first. */
export function useAudit(
  filter: MaybeRefOrGetter<AuditFilter>,
  page: MaybeRefOrGetter<{ page: number; perPage: number }>,
  enabled: () => boolean,
) {
  const asked = computed(() => ({ ...toValue(filter), ...toValue(page) }));
  return useQuery({
    queryKey: ['audit', asked],
    queryFn: () => call('audit.list', { query: queryOf(asked.value) }),
    enabled,
    placeholderData: keepPreviousData,
  });
}

const most = 200;

/** Every entry that matches, up to `limit`, page by page; `report` gets how many are here. */
export async function allAudit(
  filter: AuditFilter,
  limit: number,
  report: (count: number) => void,
): Promise<{ rows: AuditEntry[]; total: number }> {
  const rows = new Map<number, AuditEntry>();
  for (let page = 1; ; page++) {
    const reply = await call('audit.list', { query: queryOf({ ...filter, page, perPage: most }) });
    // New entries push older ones to the next page: the same one may come twice.
    for (const row of reply.rows) rows.set(row.id, row as AuditEntry);
    report(rows.size);
    if (reply.rows.length < most || rows.size >= limit) {
      return { rows: [...rows.values()].slice(0, limit), total: reply.total };
    }
  }
}

function queryOf({
  text,
  siteId,
  entity,
  entityId,
  ...page
}: AuditFilter & { page: number; perPage: number }) {
  return {
    ...page,
    ...(text ? { text } : {}),
    ...(siteId ? { siteId } : {}),
    ...(entity ? { entity } : {}),
    ...(entityId ? { entityId } : {}),
  };
}
