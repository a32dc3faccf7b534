/** The tasks that a simulated participant knows. */
import { pickAndPlaceTask } from './pick-and-place';
import { pressTask } from './press';
import { reachTask } from './reach';
import type { Task } from './task';
import { traceTask } from './trace';

export const tasks: readonly Task[] = [reachTask, pickAndPlaceTask, pressTask, traceTask];

export const taskCodes: readonly string[] = tasks.map(({ code }) => code);

export function findTask(code: string): Task | undefined {
  return tasks.find((task) => task.code === code);
}
