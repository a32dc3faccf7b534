import { queryOptions } from '@tanstack/react-query';
import { listToday } from '@shared/api/sessions';
import { call } from '../../lib/api';

export const todayQuery = queryOptions({ queryKey: ['today'], queryFn: ({ signal }) => call(listToday, { signal }) });
