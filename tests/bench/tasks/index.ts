import type { Task } from '../task';
import { clusterTasks } from './clusters';
import { labelsTask } from './labels';
import { morletTask } from './morlet';
import { ordersTask } from './orders';
import { wholeTask } from './whole';

/** In the order of the table in kernels.md. */
export const tasks: Task[] = [labelsTask, ordersTask, ...clusterTasks, morletTask, wholeTask];
