// Does all the work in wasm: `node run.js MODULE.js TIMES`. Writes JSON: for each piece of work the seconds of processor time of
// each time that it was done, and what came of it.
'use strict';
const { Bench } = require(process.argv[2]);
const times = Number(process.argv[3]);

function seconds(work) {
  const before = process.cpuUsage();
  const result = work();
  const used = process.cpuUsage(before);
  return [(used.user + used.system) / 1e6, result];
}

const answers = [];
for (let bench; (bench = Bench.prepare(answers.length)) !== undefined; ) {
  bench.run(); // Compiles: not counted.
  const done = Array.from({ length: times }, () => seconds(() => bench.run()));
  const outcome = Array.from(done[times - 1][1]);
  answers.push({ seconds: done.map((one) => one[0]), outcome, told: Array.from(bench.told()) });
}
process.stdout.write(JSON.stringify(answers));
