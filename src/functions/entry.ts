import * as position from "./a-position";
import * as firstPassage from "./b-first-passage";
import { register } from "./boundary";
import * as period from "./c-period";
import * as building from "./f-building";
import * as inspecting from "./h-inspecting";

// The script that the host loads: registers every function at once, with nothing awaited before.
register({
  TRANSITION: position.transition,
  DISTRIBUTION: position.distribution,
  STATIONARY: position.stationary,

  MEANABSORPTION: firstPassage.meanAbsorption,
  ABSORPTIONSD: firstPassage.absorptionSd,
  ABSORPTIONPROB: firstPassage.absorptionProb,
  SURVIVAL: firstPassage.survival,
  REACHED: firstPassage.reached,
  HAZARD: firstPassage.hazard,
  TIMEBEFORE: firstPassage.timeBefore,

  OCCUPANCY: period.occupancy,

  GENERATOR: building.generator,

  CHECK: inspecting.check,
  CLASSES: inspecting.classes,
});
