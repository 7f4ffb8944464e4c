import { type Observable, Subject } from 'rxjs';
import {
  type Controller,
  type Demands,
  type Measured,
  OPERATING_STATES,
  type OperatingState,
  type Orders,
  type Protection,
  type ProtectionSignals,
  type Supervisor,
} from '../controllers/contract.ts';
import { CHANNELS } from './channels.ts';
import { checkDemands } from './demand-check.ts';
import type { Frame, RunEvent, RunEventKind } from './frame.ts';
import { createFrameWriter } from './frame-writer.ts';
import type { Integrator } from './integrators/integrator.ts';
import { odex } from './integrators/odex.ts';
import { rungeKutta } from './integrators/runge-kutta.ts';
import { Plant, type SteadyState } from './plant.ts';
import { findRoot } from './root.ts';
import type { Rotor } from './rotor.ts';
import { type Action, describeAction, type ScriptedEvent } from './scripted-event.ts';
import { Sensors } from './sensors.ts';
import { checkSetup } from './setup-check.ts';
import { SimulationError } from './simulation-error.ts';
import type { Turbine } from './turbine.ts';
import type { WindField } from './wind/wind.ts';

export type IntegratorChoice = { kind: 'odex'; relativeTolerance: number } | { kind: 'runge-kutta'; step: number };

export interface RunSetup {
  turbine: Turbine;
  rotor: Rotor;
  wind: WindField;
  controller: Controller;
  supervisor: Supervisor;
  protection: Protection;
  events: readonly ScriptedEvent[];
  /** s */
  duration: number;
  seed: number;
  integrator: IntegratorChoice;
  initial: { steady: SteadyState; state: OperatingState; brakeApplied: boolean };
  /** Added to every blade's pitch demand on its way from the control law to the drives, rad (or rad/s), at time t (s). */
  pitchInjection?: (t: number) => number;
}

/** Signals that are held between the samples of the parts that write them. */
interface Held {
  readonly measured: Measured;
  readonly signals: ProtectionSignals;
  readonly demands: Demands;
  readonly supervisorOrders: Orders;
  readonly protectionOrders: Orders;
}

/** Everything that determines how a run goes on from a tick. */
export interface Snapshot {
  readonly tick: number;
  readonly data: Float64Array;
  readonly held: Held;
}

const MICROSECONDS = 1e6;
/** Wind is read no later than this before an interval's end, so that a jump at the end belongs to the next interval. */
const JUST_BEFORE = 1e-9;
/** An instant found inside an interval is exact to this, s. */
const INSTANT_TOLERANCE = 1e-10;
/** A brake that changes its mode more often than this within a tick has no physical answer. */
const MOST_CUTS = 200;
/** Beyond this multiple of the speed never to be exceeded, numbers mean nothing. */
const RUNAWAY = 3;

const PRODUCTION = OPERATING_STATES.indexOf('power production');

/** Clock's own memory: what is announced so far, and the demands that were last put under way. */
const MEMORY = [
  'announced state',
  'announced stop',
  'announced brake',
  'law in charge',
  'torque demand of the law',
  'stored energy at start',
] as const;
const [ANNOUNCED_STATE, ANNOUNCED_STOP, ANNOUNCED_BRAKE, IN_CHARGE, LAW_TORQUE, STORED_AT_START] = MEMORY.keys();

/**
 * The sampled clock: at each tick sense, guard, supervise, control; then integrate the plant to the next tick with the
 * demands held, ending the interval wherever something jumps.
 *
 * The clock owns the run's state as one flat array; `snapshot` copies it and `restore` puts it back, and a run that
 * goes on from a snapshot repeats the unbroken one bit for bit. Frames and events leave through `frames` and `events`.
 */
export class Clock {
  readonly plant: Plant;
  readonly frames: Observable<Frame>;
  readonly events: Observable<RunEvent>;
  readonly integrator: Integrator;
  /** s between ticks */
  readonly tickLength: number;
  readonly lastTick: number;

  private readonly setup: RunSetup;
  private readonly sensors: Sensors;
  private readonly data: Float64Array;
  private readonly x: Float64Array;
  private readonly memory: Float64Array;
  private readonly lawMemory: Float64Array;
  private readonly supervisorMemory: Float64Array;
  private readonly protectionMemory: Float64Array;
  private readonly own: number;
  private readonly pitchDemandAt: number;
  private readonly eventAt: number;
  private readonly announcedGuardAt: number;

  private readonly frameStream = new Subject<Frame>();
  private readonly eventStream = new Subject<RunEvent>();
  private readonly frame: Frame & { tick: number; time: number };
  private readonly trialValues = new Float64Array(CHANNELS.length);
  private readonly fill: ReturnType<typeof createFrameWriter>;
  private readonly status;
  private readonly held: Held;

  private readonly ticksPerLaw: number;
  private readonly ticksPerSupervisor: number;
  private readonly ticksPerProtection: number;
  private readonly microseconds: number;
  private readonly jumps: readonly number[];
  private readonly hasCrossings: boolean;
  private readonly hasEvents: boolean;
  private nextJump = 0;
  private readonly before: Float64Array;
  private readonly slope: Float64Array;
  private windCeiling = Number.POSITIVE_INFINITY;
  private tick = 0;

  constructor(setup: RunSetup) {
    const { turbine, controller, supervisor, protection } = setup;
    const { bladeCount } = turbine.rotor;
    const machineRated = turbine.ratings.rotorSpeed * turbine.drivetrain.gearRatio;
    this.setup = setup;

    const samples = [controller, supervisor, protection].map((part) => Math.round(part.sampleTime * MICROSECONDS));
    this.microseconds = samples.reduce(greatestCommonDivisor);
    this.tickLength = this.microseconds / MICROSECONDS;
    this.lastTick = Math.round((setup.duration * MICROSECONDS) / this.microseconds);
    [this.ticksPerLaw, this.ticksPerSupervisor, this.ticksPerProtection] = samples.map((s) => s / this.microseconds);

    const plant = new Plant(turbine, setup.rotor, setup.wind, this.tickLength);
    const slots = plant.memoryLayout;
    this.plant = plant;
    checkSetup(plant, setup.rotor, controller, setup.integrator, [
      controller.sampleTime,
      supervisor.sampleTime,
      protection.sampleTime,
    ]);
    this.sensors = new Sensors(plant, controller.sampleTime, protection.sampleTime, setup.seed, slots);
    this.own = slots.place('clock', MEMORY);
    this.pitchDemandAt = slots.place('clock', [
      ...Array.from({ length: bladeCount }, (_, b) => `pitch demand ${b + 1}`),
      'pitch demand is a rate',
    ]);
    this.eventAt = slots.place(
      'scripted event',
      setup.events.map((_, i) => `progress of event ${i + 1}`),
    );
    this.announcedGuardAt = slots.place('announced guard', protection.guards);
    const lawAt = slots.place(controller.name, controller.memory);
    const supervisorAt = slots.place('supervisor', supervisor.memory);
    const protectionAt = slots.place('protection', protection.memory);

    const states = plant.layout.size;
    this.data = new Float64Array(states + slots.size);
    this.x = this.data.subarray(0, states);
    this.memory = this.data.subarray(states);
    this.lawMemory = this.memory.subarray(lawAt, lawAt + controller.memory.length);
    this.supervisorMemory = this.memory.subarray(supervisorAt, supervisorAt + supervisor.memory.length);
    this.protectionMemory = this.memory.subarray(protectionAt, protectionAt + protection.memory.length);
    this.before = new Float64Array(states);
    this.slope = new Float64Array(states);

    const derivative = (t: number, x: ArrayLike<number>, dx: { [i: number]: number }) =>
      plant.derivative(Math.min(t, this.windCeiling), x, this.memory, dx);
    this.integrator =
      setup.integrator.kind === 'odex'
        ? odex(derivative, plant.scales(), setup.integrator.relativeTolerance)
        : rungeKutta(derivative, states, setup.integrator.step);

    this.jumps = [...setup.wind.breakpoints(setup.duration), ...scriptedInstants(setup.events)].sort((a, b) => a - b);
    this.hasEvents = setup.events.length > 0;
    this.hasCrossings = setup.events.some(({ trigger }) => trigger.kind === 'crossing');
    this.fill = createFrameWriter(plant, this.sensors);
    this.frame = { tick: 0, time: 0, values: new Float64Array(CHANNELS.length) };
    this.frames = this.frameStream.asObservable();
    this.events = this.eventStream.asObservable();
    this.status = {
      pitchDemand: this.memory.subarray(this.pitchDemandAt, this.pitchDemandAt + bladeCount),
      torqueDemand: 0,
      state: 0,
      activeGuard: 0,
    };
    this.held = {
      measured: emptyMeasured(bladeCount, machineRated, turbine.ratings.power),
      signals: emptySignals(bladeCount),
      demands: {
        pitch: new Float64Array(bladeCount),
        pitchAs: 'angle',
        generator: 0,
        generatorAs: 'torque',
        brake: false,
      },
      supervisorOrders: emptyOrders(bladeCount),
      protectionOrders: emptyOrders(bladeCount),
    };
    this.start();
  }

  /** s */
  get time(): number {
    return this.timeOf(this.tick);
  }

  /** Whether the run has reached its duration. */
  get done(): boolean {
    return this.tick > this.lastTick;
  }

  /** Runs tick by tick until `tick` has been sampled (by default the last one of the run). */
  run(tick = this.lastTick): void {
    while (this.tick <= tick && !this.done) this.step();
  }

  snapshot(): Snapshot {
    return { tick: this.tick, data: this.data.slice(), held: structuredClone(this.held) };
  }

  /** Continues from `snapshot`, taken from a run of the same setup (wind, events and parameters may differ). */
  restore(snapshot: Snapshot): void {
    if (snapshot.data.length !== this.data.length) {
      throw new Error(`a snapshot of ${snapshot.data.length} numbers does not fit a run of ${this.data.length}`);
    }
    this.data.set(snapshot.data);
    for (const name of Object.keys(this.held) as (keyof Held)[]) copySignals(snapshot.held[name], this.held[name]);
    this.tick = snapshot.tick;
    this.nextJump = this.jumps.findIndex((instant) => instant > this.time);
    if (this.nextJump < 0) this.nextJump = this.jumps.length;
  }

  /** Names and values of the plant's continuous state and of all memory, for messages and tests. */
  state(): { name: string; value: number }[] {
    const names = [...this.plant.layout.names, ...this.plant.memoryLayout.names];
    return names.map((name, i) => ({ name, value: this.data[i] }));
  }

  private start(): void {
    const { setup, plant, x, memory } = this;
    const { steady, state, brakeApplied } = setup.initial;
    const { gearRatio } = setup.turbine.drivetrain;
    plant.start(steady, brakeApplied, x, memory);
    this.sensors.start(steady.rotorSpeed, steady.rotorSpeed * gearRatio, memory);
    memory.fill(steady.pitch, this.pitchDemandAt, this.pitchDemandAt + setup.turbine.rotor.bladeCount);
    memory[this.own + ANNOUNCED_STATE] = OPERATING_STATES.indexOf(state);
    memory[this.own + ANNOUNCED_BRAKE] = brakeApplied ? 1 : 0;
    memory[this.own + IN_CHARGE] = state === 'power production' ? 1 : 0;
    memory[this.own + LAW_TORQUE] = steady.generatorTorque;
    memory[this.own + STORED_AT_START] = plant.storedEnergy(x);
    const point = {
      generatorSpeed: steady.rotorSpeed * gearRatio,
      pitch: steady.pitch,
      generatorTorque: steady.generatorTorque,
      windSpeed: setup.wind.rotorMean(0),
    };
    setup.supervisor.start(state, point, brakeApplied, this.supervisorMemory);
    setup.protection.start(this.protectionMemory);
    setup.controller.start(point, this.lawMemory);
  }

  private step(): void {
    const t = this.time;
    if (this.hasEvents) this.fireTimedEvents(t);
    this.evaluate(t);
    this.sense(t);
    this.guard(t);
    this.supervise(t);
    this.control(t);
    this.actuate(t);
    this.announce(t);
    this.fillFrame(t);
    if (this.hasCrossings) this.fireCrossings(t, this.frame.values);
    this.frameStream.next(this.frame);
    if (this.tick < this.lastTick) this.integrate(t, this.timeOf(this.tick + 1));
    this.tick++;
  }

  private timeOf(tick: number): number {
    return (tick * this.microseconds) / MICROSECONDS;
  }

  private evaluate(t: number): void {
    try {
      this.plant.derivative(t, this.x, this.memory, this.slope);
    } catch (cause) {
      throw this.failure(t, cause);
    }
  }

  private sense(t: number): void {
    if (this.tick % this.ticksPerLaw === 0) {
      this.sensors.senseForControl(t, this.tick, this.x, this.memory, this.held.measured);
    }
    if (this.tick % this.ticksPerProtection === 0) {
      this.sensors.senseForProtection(this.tick, this.x, this.memory, this.held.signals);
    }
  }

  private guard(t: number): void {
    if (this.tick % this.ticksPerProtection !== 0) return;
    clearOrders(this.held.protectionOrders);
    this.setup.protection.step(t, this.held.signals, this.protectionMemory, this.held.protectionOrders);
    this.held.measured.safetyChainActive = this.held.protectionOrders.active;
  }

  private supervise(t: number): void {
    if (this.tick % this.ticksPerSupervisor !== 0) return;
    clearOrders(this.held.supervisorOrders);
    this.setup.supervisor.step(t, this.held.measured, this.supervisorMemory, this.held.supervisorOrders);
  }

  /** The law works in power production, and starts afresh from where the machine is whenever that state is entered. */
  private control(t: number): void {
    const inCharge =
      !this.held.protectionOrders.active &&
      !this.held.supervisorOrders.active &&
      this.held.measured.state === PRODUCTION
        ? 1
        : 0;
    const { controller, turbine } = this.setup;
    if (this.tick % this.ticksPerLaw !== 0) return;
    if (inCharge === 0) {
      this.memory[this.own + IN_CHARGE] = 0;
      return;
    }
    try {
      if (this.memory[this.own + IN_CHARGE] === 0) controller.start(this.presentPoint(), this.lawMemory);
      this.memory[this.own + IN_CHARGE] = 1;
      controller.step(t, this.held.measured, this.lawMemory, this.held.demands);
    } catch (cause) {
      const reason = cause instanceof Error ? cause.message : String(cause);
      throw this.failure(t, new Error(`control law "${controller.name}" threw: ${reason}`));
    }
    const complaint = checkDemands(this.held.demands, turbine);
    if (complaint) throw this.failure(t, new Error(`control law "${controller.name}" ${complaint}`));
  }

  private presentPoint() {
    const { measured } = this.held;
    let pitch = 0;
    for (let b = 0; b < measured.pitch.length; b++) pitch += measured.pitch[b] / measured.pitch.length;
    return {
      generatorSpeed: measured.generatorSpeed,
      pitch,
      generatorTorque: this.x[this.plant.generator.at],
      windSpeed: measured.windSpeed,
    };
  }

  /** Protection before supervisor before control law; whoever is silent on a blade leaves it where it was sent last. */
  private actuate(t: number): void {
    const { plant, memory, pitchDemandAt, setup, status } = this;
    const { demands, protectionOrders, supervisorOrders } = this.held;
    const blades = demands.pitch.length;
    const orders = protectionOrders.active ? protectionOrders : supervisorOrders.active ? supervisorOrders : undefined;
    if (orders) {
      for (let b = 0; b < blades; b++) {
        if (!Number.isNaN(orders.pitch[b])) memory[pitchDemandAt + b] = orders.pitch[b];
        else if (memory[pitchDemandAt + blades] === 1) memory[pitchDemandAt + b] = this.x[plant.pitch.angleAt + b];
      }
      memory[pitchDemandAt + blades] = 0;
    } else {
      const injected = setup.pitchInjection?.(t) ?? 0;
      for (let b = 0; b < blades; b++) memory[pitchDemandAt + b] = demands.pitch[b] + injected;
      memory[pitchDemandAt + blades] = demands.pitchAs === 'rate' ? 1 : 0;
      memory[this.own + LAW_TORQUE] = this.lawTorque();
    }
    const isRate = memory[pitchDemandAt + blades] === 1;
    for (let b = 0; b < blades; b++) plant.pitch.post(this.tick, b, memory[pitchDemandAt + b], isRate, memory);
    plant.pitch.arrive(this.tick, plant.pitch.delayRest > 0, memory);
    plant.pitch.supply(plant.generator.gridConnected(memory), this.x, memory);
    plant.yaw.decide(this.x, memory);

    status.torqueDemand = memory[this.own + LAW_TORQUE] * (orders?.torqueFraction ?? 1);
    plant.generator.demand(status.torqueDemand, memory);
    // A brake that anybody asks for stays on.
    plant.brake.order(protectionOrders.brake || supervisorOrders.brake || (!orders && demands.brake), t, memory);
    status.state = protectionOrders.active ? protectionOrders.state : this.held.measured.state;
    status.activeGuard = 1 + this.setup.protection.firstGuard(this.protectionMemory);
  }

  private lawTorque(): number {
    const { generator, generatorAs } = this.held.demands;
    if (generatorAs === 'torque') return generator;
    const { efficiency, maximumTorque } = this.setup.turbine.generator;
    const speed = this.held.measured.generatorSpeed;
    return speed > 0 ? Math.min(generator / (efficiency * speed), maximumTorque) : 0;
  }

  /** Tells what has changed at this tick, causes before consequences. */
  private announce(t: number): void {
    const { memory, own, status, setup } = this;
    const stop = setup.protection.activeStop(this.protectionMemory);
    // A guard that latches begins a stop: without one there is none to tell of.
    if (stop >= 0 || memory[own + ANNOUNCED_STOP] !== 0) this.announceGuards(t);
    if (stop + 1 !== memory[own + ANNOUNCED_STOP]) {
      memory[own + ANNOUNCED_STOP] = stop + 1;
      const name = setup.protection.stops[stop];
      this.say(t, 'stop', stop < 0 ? 'safety chain is reset' : `stop sequence "${name}" begins`);
    }
    if (status.state !== memory[own + ANNOUNCED_STATE]) {
      memory[own + ANNOUNCED_STATE] = status.state;
      this.say(t, 'state', OPERATING_STATES[status.state]);
    }
    const braking = this.plant.brake.ordered(memory) ? 1 : 0;
    if (braking !== memory[own + ANNOUNCED_BRAKE]) {
      memory[own + ANNOUNCED_BRAKE] = braking;
      this.say(t, 'brake', braking ? 'brake ordered on' : 'brake released');
    }
  }

  private announceGuards(t: number): void {
    const { protection } = this.setup;
    for (let i = 0; i < protection.guards.length; i++) {
      const latched = protection.isLatched(i, this.protectionMemory) ? 1 : 0;
      if (latched === this.memory[this.announcedGuardAt + i]) continue;
      this.memory[this.announcedGuardAt + i] = latched;
      if (latched) this.say(t, 'guard', `${protection.guards[i]}: ${protection.latchedBy(i, this.protectionMemory)}`);
    }
  }

  private say(time: number, kind: RunEventKind, text: string): void {
    this.eventStream.next({ time, kind, text });
  }

  private fillFrame(t: number): void {
    const { frame, status } = this;
    frame.tick = this.tick;
    frame.time = t;
    this.fill(t, this.x, this.memory, this.memory[this.own + STORED_AT_START], status, frame.values);
  }

  private integrate(from: number, to: number): void {
    let t = from;
    for (let cut = 0; t < to; cut++) {
      if (cut > MOST_CUTS) {
        throw this.failure(
          t,
          new Error('the brake catches and slips without end; its capacity is close to the torque'),
        );
      }
      t = this.integrateUpTo(t, this.nextCut(t, to), to);
    }
  }

  /** The first instant after `t`, at most `end`, at which something is known to jump. */
  private nextCut(t: number, end: number): number {
    const { plant, memory, jumps } = this;
    while (this.nextJump < jumps.length && jumps[this.nextJump] <= t) this.nextJump++;
    let cut = end;
    if (this.nextJump < jumps.length && jumps[this.nextJump] < cut) cut = jumps[this.nextJump];
    if (plant.pitch.delayRest > 0) {
      const arrival = this.time + plant.pitch.delayRest;
      if (arrival > t && arrival < cut) cut = arrival;
    }
    if (!plant.brake.everOrdered(memory)) return cut;
    const firstTorque = plant.brake.firstTorqueAt(memory);
    if (firstTorque > t && firstTorque < cut) cut = firstTorque;
    const fullTorque = plant.brake.fullTorqueAt(memory);
    if (fullTorque > t && fullTorque < cut) cut = fullTorque;
    return cut;
  }

  /** Integrates from `from` towards `to` and returns how far it came: `to`, or the instant of an event in between. */
  private integrateUpTo(from: number, to: number, end: number): number {
    const { plant, x, memory } = this;
    this.before.set(x);
    this.advance(from, to);
    let reached = to;
    let caught = false;
    const watched = this.hasCrossings || !plant.brake.isFree(memory) || plant.brake.ordered(memory);
    if (watched) this.evaluate(Math.min(to, this.windCeiling));
    if (plant.brakeMargin(to, x, memory) < 0) {
      reached = this.locate(from, to, (t) => plant.brakeMargin(t, x, memory));
      caught = true;
    }
    const crossing = this.hasCrossings ? this.findCrossing(from, reached) : undefined;
    if (crossing) {
      caught = caught && crossing.time === reached;
      reached = crossing.time;
    }
    if (plant.pitch.delayRest > 0 && reached >= this.time + plant.pitch.delayRest && reached < end) {
      plant.pitch.arrive(this.tick, false, memory);
    }
    this.settleBrake(reached, caught);
    if (crossing) this.fire(crossing.event, reached);
    else if (this.hasEvents && reached < end) this.fireTimedEvents(reached);
    return reached;
  }

  private settleBrake(t: number, caught: boolean): void {
    const { plant, x, memory } = this;
    if (!caught && plant.brake.isFree(memory) && !plant.brake.ordered(memory)) return;
    if (!caught && t !== plant.brake.firstTorqueAt(memory) && t !== plant.brake.fullTorqueAt(memory)) return;
    const wasFree = plant.brake.isFree(memory);
    if (plant.settleBrake(t, caught, x, memory)) this.say(t, 'standstill', 'brake holds the shaft at standstill');
    else if (wasFree && !plant.brake.isFree(memory)) this.say(t, 'brake', 'brake begins to bite');
  }

  private advance(from: number, to: number): void {
    this.windCeiling = to - JUST_BEFORE;
    try {
      this.integrator.advance(from, to, this.x);
    } catch (cause) {
      throw this.failure(from, cause);
    }
    let sum = 0;
    for (let i = 0; i < this.x.length; i++) sum += this.x[i];
    const speed = this.x[this.plant.drivetrain.at + 1];
    if (Number.isFinite(sum) && Math.abs(speed) < RUNAWAY * this.setup.turbine.ratings.neverExceedSpeed) return;
    throw this.failure(to, new Error(this.likelyCause(speed)));
  }

  private likelyCause(speed: number): string {
    const rpm = (speed * 30) / Math.PI;
    if (Number.isFinite(speed) && speed !== 0) {
      return `the rotor turns at ${rpm.toFixed(1)} rpm, more than ${RUNAWAY} times the speed never to be exceeded: nothing holds it`;
    }
    return 'the state is no longer a finite number: the step is too long for the stiffest part, or an input is not finite';
  }

  private failure(t: number, cause: unknown): SimulationError {
    if (cause instanceof SimulationError) return cause;
    const message = cause instanceof Error ? cause.message : String(cause);
    return new SimulationError(t, message, this.state().slice(0, this.x.length));
  }

  /** The instant in (from, to] at which `margin` turns negative; leaves the state there. */
  private locate(from: number, to: number, margin: (t: number) => number): number {
    const at = (t: number): number => {
      this.x.set(this.before);
      if (t > from) this.advance(from, t);
      this.evaluate(Math.min(t, this.windCeiling));
      return margin(t);
    };
    const instant = findRoot(at, from, to, INSTANT_TOLERANCE);
    at(instant);
    return instant;
  }

  /** The first scripted crossing in (from, to], if any; leaves the state at its instant. */
  private findCrossing(from: number, to: number): { event: number; time: number } | undefined {
    let first: { event: number; time: number } | undefined;
    this.setup.events.forEach((event, i) => {
      if (event.trigger.kind !== 'crossing' || this.memory[this.eventAt + i] !== ARMED) return;
      const last = first?.time ?? to;
      if (this.crossingMargin(i, last) >= 0) return;
      first = { event: i, time: this.locate(from, last, (t) => this.crossingMargin(i, t)) };
    });
    return first;
  }

  /** Positive before the event's level is passed; the plant has been evaluated at `t`. */
  private crossingMargin(event: number, t: number): number {
    this.fill(t, this.x, this.memory, this.memory[this.own + STORED_AT_START], this.status, this.trialValues);
    return this.marginTo(event, this.trialValues);
  }

  private marginTo(event: number, values: Float64Array): number {
    const { trigger } = this.setup.events[event];
    if (trigger.kind !== 'crossing') return 1;
    const short = trigger.level - values[trigger.channel];
    return trigger.direction === 'above' ? short : -short;
  }

  /** At a tick: arms the crossings that are on the near side, fires those that have passed. */
  private fireCrossings(t: number, values: Float64Array): void {
    for (let i = 0; i < this.setup.events.length; i++) {
      if (this.setup.events[i].trigger.kind !== 'crossing' || this.memory[this.eventAt + i] === FIRED) continue;
      if (this.marginTo(i, values) >= 0) this.memory[this.eventAt + i] = ARMED;
      else if (this.memory[this.eventAt + i] === ARMED) this.fire(i, t);
    }
  }

  private fireTimedEvents(t: number): void {
    for (let i = 0; i < this.setup.events.length; i++) {
      const { trigger } = this.setup.events[i];
      if (trigger.kind === 'time' && trigger.at <= t && this.memory[this.eventAt + i] !== FIRED) this.fire(i, t);
    }
  }

  private fire(event: number, t: number): void {
    this.memory[this.eventAt + event] = FIRED;
    const { action } = this.setup.events[event];
    this.act(action);
    this.say(t, isOrder(action) ? 'order' : 'fault', describeAction(action));
  }

  private act(action: Action): void {
    const { plant, sensors, memory, x } = this;
    switch (action.kind) {
      case 'grid loss':
      case 'grid return':
        plant.generator.setGrid(action.kind === 'grid return', memory);
        break;
      case 'manual stop':
        sensors.pressButton(memory);
        break;
      case 'normal stop':
      case 'start':
        this.setup.supervisor.request(action.kind, this.supervisorMemory);
        break;
      case 'pitch stuck':
        for (const b of action.blades) plant.pitch.stick(b, x, memory);
        break;
      case 'speed sensor frozen':
        (action.sensor === 'control' ? sensors.controlSpeed : sensors.protectionSpeed).freeze(memory);
        break;
      case 'brake absent':
        plant.brake.remove(memory);
        break;
    }
  }
}

/** Progress of a scripted event; 0 is not yet armed. */
const ARMED = 1;
const FIRED = 2;

function isOrder(action: Action): boolean {
  return action.kind === 'start' || action.kind === 'normal stop' || action.kind === 'manual stop';
}

function scriptedInstants(events: readonly ScriptedEvent[]): number[] {
  return events.flatMap(({ trigger }) => (trigger.kind === 'time' ? [trigger.at] : []));
}

/** Copies every field of `from` into `to`, arrays by their contents. */
function copySignals(from: object, to: object): void {
  for (const [name, value] of Object.entries(from)) {
    const place = to as Record<string, unknown>;
    if (value instanceof Float64Array) (place[name] as Float64Array).set(value);
    else place[name] = value;
  }
}

function greatestCommonDivisor(a: number, b: number): number {
  return b === 0 ? a : greatestCommonDivisor(b, a % b);
}

function emptyOrders(bladeCount: number): Orders {
  return {
    active: false,
    state: 0,
    pitch: new Float64Array(bladeCount).fill(Number.NaN),
    torqueFraction: 1,
    brake: false,
  };
}

function clearOrders(orders: Orders): void {
  orders.active = false;
  orders.state = 0;
  // A loop: `fill` costs more than the three numbers, and this runs at every sample.
  for (let b = 0; b < orders.pitch.length; b++) orders.pitch[b] = Number.NaN;
  orders.torqueFraction = 1;
  orders.brake = false;
}

function emptySignals(bladeCount: number): ProtectionSignals {
  return {
    rotorSpeed: 0,
    generatorSpeed: 0,
    electricalPower: 0,
    pitch: new Float64Array(bladeCount),
    pitchDemand: new Float64Array(bladeCount),
    gridConnected: true,
    buttonPressed: false,
    towerAccelerationForeAft: 0,
  };
}

function emptyMeasured(bladeCount: number, speedSetpoint: number, powerSetpoint: number): Measured {
  return {
    generatorSpeed: 0,
    rotorSpeed: 0,
    rotorAzimuth: 0,
    pitch: new Float64Array(bladeCount),
    windSpeed: 0,
    windDirection: 0,
    towerAccelerationForeAft: 0,
    towerAccelerationSideSide: 0,
    flapMoment: new Float64Array(bladeCount).fill(Number.NaN),
    electricalPower: 0,
    gridConnected: true,
    safetyChainActive: false,
    state: PRODUCTION,
    speedSetpoint,
    powerSetpoint,
  };
}
