import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { Model, models } from '../../shared/contracts/models.ts';
import type { Sheet, SheetFields } from '../../shared/contracts/register.ts';
import type { samples } from '../../shared/contracts/samples.ts';
import { call } from '../api/call.ts';

type PointBody = z.input<(typeof samples)['samplePoints.add']['body']>;
type MethodBody = z.input<(typeof samples)['methods.add']['body']>;
type ProposalBody = z.input<(typeof models)['revisions.propose']['body']>;
type DecisionBody = z.input<(typeof models)['revisions.decide']['body']>;

export function useRegister(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['register', siteId],
    queryFn: () => {
      const site = toValue(siteId);
      return call('register.list', { query: site === null ? {} : { siteId: String(site) } });
    },
    select: (reply) => reply.rows,
  });
}

const sheetKey = (id: number) => ['sheet', id];

/** A data sheet; asked for again every few seconds while its estimates are being computed. */
export function useSheet(id: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['sheet', id],
    queryFn: () => call('register.get', { params: { softSensorId: String(toValue(id)) } }),
    enabled: computed(() => toValue(id) !== null),
    refetchInterval: (query) => (query.state.data?.working ? 2000 : 60_000),
  });
}

export function useRevisions(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['revisions', id],
    queryFn: () => call('revisions.list', { params: { softSensorId: String(toValue(id)) } }),
    select: (reply) => reply.rows,
  });
}

export function useSamplePoints(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['sample-points', siteId],
    queryFn: () => call('samplePoints.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

export function useMethods(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['methods', siteId],
    queryFn: () => call('methods.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

/** Active people with a role at the site, to name owners and approvers. */
export function usePeopleAtSite(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['people-at-site', siteId],
    queryFn: () => call('people.atSite', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

export function useAddSamplePoint() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ siteId, body }: { siteId: number; body: PointBody }) =>
      call('samplePoints.add', { params: { siteId: String(siteId) }, body }),
    onSuccess: (_added, { siteId }) => client.invalidateQueries({ queryKey: ['sample-points', siteId] }),
  });
}

export function useAddMethod() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ siteId, body }: { siteId: number; body: MethodBody }) =>
      call('methods.add', { params: { siteId: String(siteId) }, body }),
    onSuccess: (_added, { siteId }) => client.invalidateQueries({ queryKey: ['methods', siteId] }),
  });
}

/** Takes a sheet that an answer brought, and lets every list that shows it be fetched anew. */
function useTakeSheet() {
  const client = useQueryClient();
  return (sheet: Sheet) => {
    client.setQueryData(sheetKey(sheet.id), sheet);
    for (const key of ['register', 'board']) void client.invalidateQueries({ queryKey: [key] });
    refreshRecord(client, sheet.id);
  };
}

function refreshRecord(client: ReturnType<typeof useQueryClient>, id: number): void {
  for (const key of ['revisions', 'performance', 'series', 'audit'])
    void client.invalidateQueries({ queryKey: [key, id] });
}

/** Fetches a sheet anew, and what hangs on it. */
export function useRefreshSheet() {
  const client = useQueryClient();
  return async (id: number) => {
    await client.invalidateQueries({ queryKey: sheetKey(id) });
    for (const key of ['register', 'board']) void client.invalidateQueries({ queryKey: [key] });
    refreshRecord(client, id);
  };
}

export function useAddSoftSensor() {
  const take = useTakeSheet();
  return useMutation({
    mutationFn: ({ siteId, body }: { siteId: number; body: SheetFields }) =>
      call('register.add', { params: { siteId: String(siteId) }, body }),
    onSuccess: take,
  });
}

export function useChangeSheet(id: MaybeRefOrGetter<number>) {
  const take = useTakeSheet();
  return useMutation({
    mutationFn: (body: { fields: SheetFields; version: number }) =>
      call('register.change', { params: { softSensorId: String(toValue(id)) }, body }),
    onSuccess: take,
  });
}

export function useSaveDraft(id: MaybeRefOrGetter<number>) {
  const refresh = useRefreshSheet();
  return useMutation({
    mutationFn: (body: { model: Model; version: number | null }) =>
      call('drafts.save', { params: { softSensorId: String(toValue(id)) }, body }),
    onSuccess: () => refresh(toValue(id)),
  });
}

export function useFitDraft(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: { from: string; to: string; version: number }) =>
      call('drafts.fit', { params: { softSensorId: String(toValue(id)) }, body }),
  });
}

export function useProposeRevision(id: MaybeRefOrGetter<number>) {
  const refresh = useRefreshSheet();
  return useMutation({
    mutationFn: (body: ProposalBody) =>
      call('revisions.propose', { params: { softSensorId: String(toValue(id)) }, body }),
    onSuccess: () => refresh(toValue(id)),
  });
}

export function useDecideRevision() {
  const refresh = useRefreshSheet();
  return useMutation({
    mutationFn: ({ revisionId, body }: { revisionId: number; body: DecisionBody }) =>
      call('revisions.decide', { params: { revisionId: String(revisionId) }, body }),
    onSuccess: (revision) => refresh(revision.softSensorId),
  });
}

export function useWithdrawRevision() {
  const refresh = useRefreshSheet();
  return useMutation({
    mutationFn: (revisionId: number) =>
      call('revisions.withdraw', { params: { revisionId: String(revisionId) }, body: {} }),
    onSuccess: (revision) => refresh(revision.softSensorId),
  });
}

export function useSuspend(id: MaybeRefOrGetter<number>) {
  const take = useTakeSheet();
  return useMutation({
    mutationFn: (reason: string) =>
      call('life.suspend', { params: { softSensorId: String(toValue(id)) }, body: { reason } }),
    onSuccess: take,
  });
}

/** Says afterwards why it was suspended. */
export function useSayWhySuspended(id: MaybeRefOrGetter<number>) {
  const take = useTakeSheet();
  return useMutation({
    mutationFn: (reason: string) =>
      call('life.reason', { params: { softSensorId: String(toValue(id)) }, body: { reason } }),
    onSuccess: take,
  });
}

export function usePutBack(id: MaybeRefOrGetter<number>) {
  const take = useTakeSheet();
  return useMutation({
    mutationFn: () => call('life.putBack', { params: { softSensorId: String(toValue(id)) } }),
    onSuccess: take,
  });
}

/** The audit trail of one soft sensor, a page at a time. */
export function useSheetAudit(
  id: MaybeRefOrGetter<number>,
  page: MaybeRefOrGetter<number>,
  enabled: MaybeRefOrGetter<boolean>,
) {
  return useQuery({
    queryKey: ['audit', id, page],
    queryFn: () =>
      call('audit.list', {
        query: { entity: 'softSensor', entityId: String(toValue(id)), page: toValue(page), perPage: 25 },
      }),
    enabled,
  });
}
