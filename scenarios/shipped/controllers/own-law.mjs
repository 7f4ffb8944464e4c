// A control law of one's own: a PI pitch law with a gain that falls with pitch, and constant torque.
//
// The contract: declare the sample time, what is remembered and what is measured; keep every number that must last
// from one sample to the next in `memory`; write every field of `demands`. SI units and radians; pitch is positive
// towards feather.

const INTEGRAL = 0;
const LAST_PITCH = 1;

/** @type {import('galehold/contract').ControllerFactory<Record<string, number>>} */
export default function ownLaw(settings, machine) {
  const {
    sample_time: sampleTime,
    proportional,
    integral,
    halving_pitch: halvingPitch,
    rate_limit: rateLimit,
  } = settings;
  const limit = (value, low, high) => Math.min(Math.max(value, low), high);

  return {
    name: 'own law',
    sampleTime,
    memory: ['integral', 'last pitch'],
    needs: ['generatorSpeed'],
    start(point, memory) {
      memory[INTEGRAL] = point.pitch;
      memory[LAST_PITCH] = point.pitch;
    },
    step(_t, measured, memory, demands) {
      const error = measured.generatorSpeed - measured.speedSetpoint;
      const factor = 1 / (1 + Math.max(memory[LAST_PITCH], 0) / halvingPitch);
      memory[INTEGRAL] = limit(
        memory[INTEGRAL] + factor * integral * error * sampleTime,
        machine.finePitch,
        machine.featherPitch,
      );
      const wanted = limit(memory[INTEGRAL] + factor * proportional * error, machine.finePitch, machine.featherPitch);
      const step = rateLimit * sampleTime;
      memory[LAST_PITCH] = limit(wanted, memory[LAST_PITCH] - step, memory[LAST_PITCH] + step);
      demands.pitch.fill(memory[LAST_PITCH]);
      demands.pitchAs = 'angle';
      demands.generator = machine.ratedTorque * limit(measured.generatorSpeed / machine.ratedGeneratorSpeed, 0, 1) ** 2;
      demands.generatorAs = 'torque';
      demands.brake = false;
    },
  };
}
