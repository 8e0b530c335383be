import * as position from "./a-position";
import * as firstPassage from "./b-first-passage";
import { register } from "./boundary";
import * as period from "./c-period";
import * as service from "./d-service";
import * as sensitivity from "./e-sensitivity";
import * as building from "./f-building";
import * as data from "./g-data";
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
  PERCENTILE: firstPassage.percentile,
  TIMEBEFORE: firstPassage.timeBefore,
  QUASISTATIONARY: firstPassage.quasiStationary,

  OCCUPANCY: period.occupancy,
  JUMPS: period.jumps,
  FAILURES: period.failures,
  COST: period.cost,
  COSTUNTIL: period.costUntil,
  COSTRATE: period.costRate,
  PHASED: period.phased,
  PHASEDOCCUPANCY: period.phasedOccupancy,
  INSPECTION: period.inspection,

  AVAILABILITY: service.availability,
  INTERVALAVAILABILITY: service.intervalAvailability,
  UPDOWN: service.upDown,
  FLOWS: service.flows,

  ELASTICITY: sensitivity.elasticity,
  MEANTIMEELASTICITY: sensitivity.meanTimeElasticity,
  COSTELASTICITY: sensitivity.costElasticity,
  RATEFORGOAL: sensitivity.rateForGoal,
  AVAILABILITYBAND: sensitivity.availabilityBand,

  GENERATOR: building.generator,
  FROMLIST: building.fromList,
  BIRTHDEATH: building.birthDeath,
  REPAIRGROUP: building.repairGroup,
  QUEUE: building.queue,
  COMBINE: building.combine,
  STAGES: building.stages,
  LUMP: building.lump,

  FROMPROBABILITY: data.fromProbability,
  EMBEDDINGGAP: data.embeddingGap,
  FROMCOUNTS: data.fromCounts,
  FROMLOG: data.fromLog,
  RATEINTERVAL: data.rateInterval,

  CHECK: inspecting.check,
  CLASSES: inspecting.classes,
  JUMPCHAIN: inspecting.nextStates,
  HOLDING: inspecting.holding,
  SETTLING: inspecting.settling,
  SAMPLEPATH: inspecting.samplePath,
  FINGERPRINT: inspecting.fingerprint,
  COMPARE: inspecting.compare,
});
