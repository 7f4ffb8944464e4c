import { describe, expect, it } from 'vitest';
import { airfoilOf } from '../../sim/aerodynamics/airfoil.ts';
import { type BladeSection, bladeOf } from '../../sim/aerodynamics/blade.ts';
import { emptyFlow, FULL_MOMENTUM, solveSection } from '../../sim/aerodynamics/momentum.ts';
import { steadyRotor } from '../../sim/aerodynamics/steady-rotor.ts';
import { AIR_DENSITY, ROTOR } from './demo-rotor.ts';
import { ningFlow } from './ning.ts';

const DEGREE = Math.PI / 180;
const blade = bladeOf(ROTOR);
const flow = emptyFlow();

/** A thin section of constant lift slope, without drag to speak of. */
const straight = airfoilOf({
  kind: 'table',
  name: 'straight',
  angle: [-0.3, -0.1, 0.1, 0.3],
  lift: [-1.8, -0.6, 0.6, 1.8],
  drag: [1e-9, 1e-9, 1e-9, 1e-9],
  aspectRatio: 10,
});
const NO_LOSS = { ...FULL_MOMENTUM, tipLoss: false, hubLoss: false };

describe('the balance at one section', () => {
  it('is Ning’s wherever momentum theory holds (a up to 0.4)', () => {
    let compared = 0;
    for (const ratio of [4, 6, 8, 10]) {
      for (const section of blade.sections) {
        const rotorSpeed = (ratio * 10) / 65;
        const ning = ningFlow(section, blade, 10, rotorSpeed, AIR_DENSITY);
        if (!ning || ning.axialInduction > 0.4) continue;
        solveSection(section, blade, 10, rotorSpeed, 0, AIR_DENSITY, FULL_MOMENTUM, flow);
        expect(flow.inflowAngle).toBeCloseTo(ning.phi, 7);
        expect(flow.axialInduction).toBeCloseTo(ning.axialInduction, 7);
        expect(flow.swirlInduction).toBeCloseTo(ning.swirlInduction, 7);
        compared++;
      }
    }
    expect(compared).toBeGreaterThan(100);
  });

  it('changes the rotor’s torque and thrust by less than 0.03 % where it departs from Ning’s above a = 0.4', () => {
    const rotorSpeed = (8 * 10) / 65;
    let torque = 0;
    let thrust = 0;
    for (const section of blade.sections) {
      const ning = ningFlow(section, blade, 10, rotorSpeed, AIR_DENSITY);
      if (!ning) throw new Error(`Ning's residual has no root at ${section.radius} m`);
      torque += 3 * ning.tangentialForce * section.radius * section.width;
      thrust += 3 * ning.normalForce * section.width;
    }
    const ours = steadyRotor(blade, 10, rotorSpeed, 0, AIR_DENSITY);
    expect(Math.abs(ours.torque / torque - 1)).toBeLessThan(3e-4);
    expect(Math.abs(ours.thrust / thrust - 1)).toBeLessThan(3e-4);
  });

  it('holds Glauert’s relation a(1 − a) = a′(1 + a′)λ_r² in a thin annulus without drag', () => {
    const section: BladeSection = { radius: 30, width: 0.1, chord: 2, twist: 0.03, airfoil: straight };
    for (const rotorSpeed of [1.2, 1.4, 1.7, 2]) {
      solveSection(section, blade, 10, rotorSpeed, 0, AIR_DENSITY, NO_LOSS, flow);
      const { axialInduction: a, swirlInduction: swirl } = flow;
      expect(a).toBeLessThan(0.4);
      expect(a * (1 - a)).toBeCloseTo(swirl * (1 + swirl) * ((rotorSpeed * 30) / 10) ** 2, 7);
      // Thrust on the annulus, per metre of radius: 4a(1 − a) · ½ρV² · 2πr.
      const momentum = 4 * a * (1 - a) * 0.5 * AIR_DENSITY * 100 * 2 * Math.PI * 30;
      expect((3 * flow.normalForce) / momentum).toBeCloseTo(1, 7);
    }
  });

  it('follows Buhl’s thrust law between a = 0.4 and 1', () => {
    const section: BladeSection = { radius: 30, width: 0.1, chord: 4, twist: -0.05, airfoil: straight };
    for (const rotorSpeed of [2, 2.5, 3]) {
      solveSection(section, blade, 10, rotorSpeed, 0, AIR_DENSITY, NO_LOSS, flow);
      const a = flow.axialInduction;
      expect(a).toBeGreaterThan(0.4);
      expect(a).toBeLessThan(1);
      const thrust = (3 * flow.normalForce) / (0.5 * AIR_DENSITY * 100 * 2 * Math.PI * 30);
      expect(thrust).toBeCloseTo(8 / 9 + (4 - 40 / 9) * a + (50 / 9 - 4) * a ** 2, 6);
    }
  });

  it('blows against a light wind, a above 1, on a law that leaves Buhl’s at a = 1 and tends to the fan’s', () => {
    const section: BladeSection = { radius: 30, width: 0.1, chord: 4, twist: -0.16, airfoil: straight };
    for (const wind of [0.5, 1.5, 2.5]) {
      solveSection(section, blade, wind, 1.3, 0, AIR_DENSITY, NO_LOSS, flow);
      const beyond = flow.axialInduction - 1;
      expect(beyond).toBeGreaterThan(0.1);
      const thrust = (3 * flow.normalForce) / (0.5 * AIR_DENSITY * wind ** 2 * 2 * Math.PI * 30);
      expect(thrust / (2 + (20 / 3 - 4) * beyond + 4 * beyond ** 2)).toBeCloseTo(1, 6);
    }
  });

  it('is a fan in still air: thrust 2ρA times the square of the induced speed', () => {
    const section: BladeSection = { radius: 30, width: 0.1, chord: 2, twist: 0.08, airfoil: straight };
    for (const pitch of [0, -0.16]) {
      solveSection(section, blade, 0, 1.3, pitch, AIR_DENSITY, NO_LOSS, flow);
      const induced = -flow.normalSpeed;
      const thrust = 2 * AIR_DENSITY * 2 * Math.PI * 30 * induced * Math.abs(induced);
      expect(Math.abs(induced)).toBeGreaterThan(0.5);
      expect((3 * flow.normalForce) / thrust).toBeCloseTo(1, 6);
    }
  });

  it('mirrors when wind and load are reversed', () => {
    const mirrored: BladeSection = { radius: 30, width: 0.1, chord: 2, twist: -0.03, airfoil: straight };
    const section: BladeSection = { ...mirrored, twist: 0.03 };
    const mirror = emptyFlow();
    solveSection(section, blade, 10, 1.3, 0, AIR_DENSITY, NO_LOSS, flow);
    solveSection(mirrored, blade, -10, 1.3, 0, AIR_DENSITY, NO_LOSS, mirror);
    expect(mirror.inflowAngle).toBeCloseTo(-flow.inflowAngle, 9);
    expect(mirror.normalForce).toBeCloseTo(-flow.normalForce, 6);
    expect(mirror.tangentialForce).toBeCloseTo(flow.tangentialForce, 6);
  });

  it('leaves out of the induction what the options leave out', () => {
    const section = blade.sections[25];
    const induction = (change: object): [number, number] => {
      solveSection(section, blade, 10, 1.26, 0, AIR_DENSITY, { ...FULL_MOMENTUM, ...change }, flow);
      return [flow.axialInduction, flow.swirlInduction];
    };
    const [axial, swirl] = induction({});
    expect(induction({ wakeRotation: false })[1]).toBeCloseTo(0, 9);
    // Drag takes from the torque that the swirl answers, and adds to the thrust that slows the wind.
    const [axialNoDrag, swirlNoDrag] = induction({ dragInInduction: false });
    expect(swirlNoDrag).toBeGreaterThan(swirl);
    expect(axialNoDrag).toBeLessThan(axial);
    solveSection(blade.sections[38], blade, 10, 1.26, 0, AIR_DENSITY, FULL_MOMENTUM, flow);
    expect(flow.lossFactor).toBeLessThan(0.5);
    solveSection(blade.sections[38], blade, 10, 1.26, 0, AIR_DENSITY, NO_LOSS, flow);
    expect(flow.lossFactor).toBe(1);
  });
});

describe('the rotor in every wind and at every speed', () => {
  const area = 0.5 * AIR_DENSITY * Math.PI * 65 ** 2;
  /** Loads over ½ρA(V² + (ωR)²), for a direction of (ωR, V) and a pitch in degrees. */
  function scaled(direction: number, pitch: number): { torque: number; thrust: number } {
    const { torque, thrust } = steadyRotor(
      blade,
      Math.sin(direction),
      Math.cos(direction) / 65,
      pitch * DEGREE,
      AIR_DENSITY,
    );
    return { torque: torque / area / 65, thrust: thrust / area };
  }

  const pitches = Array.from({ length: 22 }, (_, i) => -10 + 5 * i);

  it('has one finite answer that jumps nowhere, all round the circle of wind and tip speed, −10° to 95° of pitch', () => {
    const steps = 720;
    for (const pitch of pitches) {
      let before = scaled(-Math.PI, pitch);
      for (let i = 1; i <= steps; i++) {
        const here = scaled(-Math.PI + (2 * Math.PI * i) / steps, pitch);
        // Half a degree of direction may move thrust by 3 % and torque by 0.6 % of ½ρA(V² + (ωR)²); a NaN fails too.
        expect(Math.abs(here.thrust - before.thrust)).toBeLessThan(0.03);
        expect(Math.abs(here.torque - before.torque)).toBeLessThan(0.006);
        before = here;
      }
    }
  });

  it('moves smoothly with pitch at every tip-speed ratio from −2 to 60', () => {
    for (const ratio of [-2, -1, 0, 0.5, 1, 2, 4, 6, 8, 10, 13, 16, 20, 30, 60]) {
      let before = scaled(Math.atan2(1, ratio), -10);
      for (let pitch = -9.5; pitch <= 95; pitch += 0.5) {
        const here = scaled(Math.atan2(1, ratio), pitch);
        expect(Math.abs(here.thrust - before.thrust)).toBeLessThan(0.02);
        expect(Math.abs(here.torque - before.torque)).toBeLessThan(0.006);
        before = here;
      }
    }
  });

  it('gives the same coefficients at 1 and at 70 m/s', () => {
    const slow = steadyRotor(blade, 1, 7 / 65, 0.05, AIR_DENSITY);
    const fast = steadyRotor(blade, 70, 490 / 65, 0.05, AIR_DENSITY);
    expect(fast.powerCoefficient).toBeCloseTo(slow.powerCoefficient, 9);
    expect(fast.thrustCoefficient).toBeCloseTo(slow.thrustCoefficient, 9);
  });

  it('takes no more from the air than thrust times wind, and never more than Betz allows', () => {
    for (const pitch of pitches) {
      for (let ratio = 0.25; ratio <= 20; ratio += 0.25) {
        const loads = steadyRotor(blade, 10, (ratio * 10) / 65, pitch * DEGREE, AIR_DENSITY);
        expect(loads.power).toBeLessThanOrEqual(loads.thrust * 10);
        expect(loads.powerCoefficient).toBeLessThan(16 / 27);
      }
    }
  });

  it('obeys that at each section too, whichever way wind and rotor go', () => {
    for (const pitch of pitches) {
      for (let i = 0; i < 360; i++) {
        const wind = 10 * Math.sin(i * DEGREE);
        const tipSpeed = 10 * Math.cos(i * DEGREE);
        for (const section of blade.sections) {
          solveSection(section, blade, wind, tipSpeed / 65, pitch * DEGREE, AIR_DENSITY, FULL_MOMENTUM, flow);
          const edgeSpeed = (tipSpeed / 65) * section.radius;
          expect(flow.tangentialForce * edgeSpeed).toBeLessThanOrEqual(flow.normalForce * wind + 1e-6);
        }
      }
    }
  });
});
