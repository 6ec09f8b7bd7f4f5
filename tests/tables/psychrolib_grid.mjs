// Prints a grid of moist air worked out by the npm package psychrolib, for weather-psychrolib.csv
// and for the live comparison (tests/outside/psychrolib.sh).
//   node psychrolib_grid.mjs FOLDER recorded   the rows of weather-psychrolib.csv
//   node psychrolib_grid.mjs FOLDER dense      a finer grid
// FOLDER holds node_modules/psychrolib.
import { createRequire } from "node:module";
import { join, resolve } from "node:path";

const [folder, grid] = process.argv.slice(2);
const load = createRequire(join(resolve(folder), "here.js"));
const library = load("psychrolib");
const { version } = load("psychrolib/package.json");
library.SetUnitSystem(library.SI);

const dense = grid === "dense";
const steps = (from, to, by) =>
  Array.from({ length: Math.round((to - from) / by) + 1 }, (_, i) => from + i * by);
const temperatures = dense ? steps(-10, 50, 1) : steps(-10, 50, 5);
const humidities = dense ? steps(5, 100, 2.5) : [5, 10, 20, 35, 50, 65, 80, 90, 95, 100];
const pressures = dense ? [101.325, 97.5, 92.3, 85, 78] : [101.325, 92.3, 78];

console.log("temperature,humidity,pressure,vapour_pressure,dew_point,wet_bulb,origin");
for (const t of temperatures) {
  for (const rh of humidities) {
    for (const p of pressures) {
      const vapour = library.GetVapPresFromRelHum(t, rh / 100) / 1000;
      const dew = library.GetTDewPointFromRelHum(t, rh / 100);
      const bulb = library.GetTWetBulbFromRelHum(t, rh / 100, p * 1000);
      const numbers = [vapour.toFixed(6), dew.toFixed(4), bulb.toFixed(4)];
      console.log([t, rh, p, ...numbers, `independent tool: psychrolib ${version}`].join(","));
    }
  }
}
