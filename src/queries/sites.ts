import { type QueryClient, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { Area, Site, sites, Unit } from '../../shared/contracts/sites.ts';
import { call } from '../api/call.ts';

export function useSites() {
  return useQuery({
    queryKey: ['sites'],
    queryFn: () => call('sites.list', {}),
    select: (reply) => reply.rows,
  });
}

/** Areas and units of a site; idle while there is no site. */
export function useUnits(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['units', siteId],
    queryFn: () => call('units.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

export function useAreas(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['areas', siteId],
    queryFn: () => call('areas.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

type SiteBody = z.input<(typeof sites)['sites.add']['body']>;
type SiteChange = z.input<(typeof sites)['sites.change']['body']>;
type AreaBody = z.input<(typeof sites)['areas.add']['body']>;
type AreaChange = z.input<(typeof sites)['areas.change']['body']>;
type UnitBody = z.input<(typeof sites)['units.add']['body']>;
type UnitChange = z.input<(typeof sites)['units.change']['body']>;

/** Adds a site, or changes the one with this id. */
export function useSaveSite() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (order: { id: null; body: SiteBody } | { id: number; body: SiteChange }): Promise<Site> =>
      order.id === null
        ? call('sites.add', { body: order.body })
        : call('sites.change', { params: { siteId: String(order.id) }, body: order.body }),
    onSettled: () => client.invalidateQueries({ queryKey: ['sites'] }),
  });
}

/** Adds an area to a site, or changes the one with this id. */
export function useSaveArea(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (order: { id: null; body: AreaBody } | { id: number; body: AreaChange }): Promise<Area> =>
      order.id === null
        ? call('areas.add', { params: { siteId: String(siteId) }, body: order.body })
        : call('areas.change', { params: { areaId: String(order.id) }, body: order.body }),
    onSettled: () => refreshPlant(client, siteId),
  });
}

/** Adds a unit to a site, or changes the one with this id. */
export function useSaveUnit(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (order: { id: null; body: UnitBody } | { id: number; body: UnitChange }): Promise<Unit> =>
      order.id === null
        ? call('units.add', { params: { siteId: String(siteId) }, body: order.body })
        : call('units.change', { params: { unitId: String(order.id) }, body: order.body }),
    onSettled: () => refreshPlant(client, siteId),
  });
}

/** Names of areas and units stand in each other's rows and in those of tags. */
const refreshPlant = (client: QueryClient, siteId: number) =>
  Promise.all(
    ['areas', 'units', 'tags'].map((kind) => client.invalidateQueries({ queryKey: [kind, siteId] })),
  );
