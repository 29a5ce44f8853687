import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { calibrations } from '../../shared/contracts/calibrations.ts';
import { call } from '../api/call.ts';
import { useRefreshSheet } from './register.ts';

type Body<K extends 'propose' | 'decide' | 'enter'> = z.input<
  (typeof calibrations)[`calibrations.${K}`]['body']
>;

/** Candidates of a recalibration as the samples stand now. */
export function useEvidence(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['evidence', id],
    queryFn: () => call('calibrations.evidence', { params: { softSensorId: String(toValue(id)) } }),
  });
}

export function useCalibrations(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['calibrations', id],
    queryFn: () => call('calibrations.list', { params: { softSensorId: String(toValue(id)) } }),
    select: (reply) => reply.rows,
  });
}

export function useCalibration(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['calibration', id],
    queryFn: () => call('calibrations.get', { params: { calibrationId: String(toValue(id)) } }),
  });
}

/** Fetches anew whatever shows a soft sensor's calibrations. */
function useRefresh() {
  const client = useQueryClient();
  const refreshSheet = useRefreshSheet();
  return async ({ id, softSensorId }: { id: number; softSensorId: number }) => {
    for (const key of ['evidence', 'calibrations'])
      void client.invalidateQueries({ queryKey: [key, softSensorId] });
    for (const key of ['board', 'duties']) void client.invalidateQueries({ queryKey: [key] });
    await Promise.all([
      client.invalidateQueries({ queryKey: ['calibration', id] }),
      refreshSheet(softSensorId),
    ]);
  };
}

export function useProposeCalibration(softSensorId: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: Body<'propose'>) =>
      call('calibrations.propose', { params: { softSensorId: String(toValue(softSensorId)) }, body }),
    onSuccess: useRefresh(),
  });
}

export function useDecideCalibration(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: Body<'decide'>) =>
      call('calibrations.decide', { params: { calibrationId: String(toValue(id)) }, body }),
    onSuccess: useRefresh(),
  });
}

export function useWithdrawCalibration(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: () => call('calibrations.withdraw', { params: { calibrationId: String(toValue(id)) } }),
    onSuccess: useRefresh(),
  });
}

export function useEnterCalibration(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: Body<'enter'>) =>
      call('calibrations.enter', { params: { calibrationId: String(toValue(id)) }, body }),
    onSuccess: useRefresh(),
  });
}

/** Confirms several as found; what was refused comes back with its reason. */
export function useConfirmAsFound() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (softSensorIds: number[]) => call('calibrations.confirm', { body: { softSensorIds } }),
    onSuccess: () => {
      for (const key of ['board', 'duties', 'sheet', 'calibrations', 'evidence'])
        void client.invalidateQueries({ queryKey: [key] });
    },
  });
}
