/**
 * Times our way to do one task, as twins/twin.py times the other: warm up, repeat, leave the last
 * result beside the inputs, print the times in seconds.
 */
import { tasks } from './tasks';
import { write } from './task';

const [, , index, folder, repeats] = process.argv;
const work = tasks[Number(index)].load(folder);
// Compilers need some goes before a loop has its final speed.
let result = work();
result = work();
const times: [number, number][] = [];
for (let i = 0; i < Number(repeats); i++) {
  const start = performance.now();
  const cpu = process.cpuUsage();
  result = work();
  const used = process.cpuUsage(cpu);
  times.push([(performance.now() - start) / 1000, (used.user + used.system) / 1e6]);
}
write(folder, 'ours.f64', Float64Array.from(result));
console.log(JSON.stringify({ times }));
