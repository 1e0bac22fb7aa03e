import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import {
  changeColumnPlan,
  listColumnPlans,
  retireColumnPlan,
  saveColumnPlan,
} from '../../../shared/contracts/column-plans.ts';
import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import { call } from '../../api/call.ts';

export const columnPlansQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'column-plans'],
    queryFn: ({ signal }) => call(listColumnPlans, { params: { siteId }, signal }),
  });

interface PlanBody {
  name: string;
  plan: ColumnPlan;
  header: string[];
}

export function useSaveColumnPlan(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: PlanBody) => call(saveColumnPlan, { params: { siteId }, body }),
    onSuccess: () => client.invalidateQueries(columnPlansQuery(siteId)),
  });
}

export function useChangeColumnPlan(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: Partial<PlanBody> }) =>
      call(changeColumnPlan, { params: { siteId, planId: id }, body }),
    onSuccess: () => client.invalidateQueries(columnPlansQuery(siteId)),
  });
}

export function useRetireColumnPlan(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (planId: number) => call(retireColumnPlan, { params: { siteId, planId } }),
    onSuccess: () => client.invalidateQueries(columnPlansQuery(siteId)),
  });
}
