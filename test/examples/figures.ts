/** Every folder of `examples/`, with what it should come to. */
import type { Example } from "./example.ts";
import { doughPieces } from "./scenarios/bakery.ts";
import { clothRolls } from "./scenarios/cloth-inspection.ts";
import { milkFat } from "./scenarios/dairy.ts";
import { fillWeight } from "./scenarios/fill-weight.ts";
import { shaftDiameter } from "./scenarios/library.ts";
import { mouldingShots } from "./scenarios/moulding-shots.ts";
import { pumpVibration } from "./scenarios/pump-vibration.ts";
import { rackHeat } from "./scenarios/server-room.ts";
import { wetPacks } from "./scenarios/sterile-supply.ts";
import { stripGauge } from "./scenarios/strip-gauge.ts";
import { filterTurbidity } from "./scenarios/waterworks.ts";

export const examples: readonly Example[] = [
  fillWeight(),
  stripGauge(),
  mouldingShots(),
  wetPacks(),
  clothRolls(),
  rackHeat(),
  doughPieces(),
  filterTurbidity(),
  pumpVibration(),
  milkFat(),
  shaftDiameter(),
];
