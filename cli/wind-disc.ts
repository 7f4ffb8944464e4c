/** The rotor disc in motion. `moveDisc` runs in the page: it is carried there as text, so it uses nothing from outside itself. */

export interface DiscData {
  rings: number;
  spokes: number;
  rate: number;
  frames: number;
  /** Frames, cell by cell, one byte each between `lowest` and `highest` (m/s), base 64. */
  cells: string;
  lowest: number;
  highest: number;
  /** What stands for no deviation, m/s, and the deviation of the full colours. */
  middle: number;
  reach: number;
  rotorSpeed: number;
  bladeCount: number;
  duration: number;
  start: number;
  /** At each frame: m/s, and degrees or null. */
  hub: number[];
  rotorMean: number[];
  direction: number[] | null;
}

export function moveDisc(data: DiscData): void {
  const cells = Uint8Array.from(atob(data.cells), (character) => character.charCodeAt(0));
  const found = {
    canvas: document.querySelector<HTMLCanvasElement>('#disc'),
    play: document.querySelector<HTMLButtonElement>('#play'),
    pace: document.querySelector<HTMLSelectElement>('#pace'),
    slider: document.querySelector<HTMLInputElement>('#instant'),
    reading: document.querySelector<HTMLElement>('#reading'),
    chart: document.querySelector<SVGSVGElement>('#time-chart'),
  };
  const { canvas, play, pace, slider, reading, chart } = found;
  const pen = canvas?.getContext('2d');
  if (!canvas || !pen || !play || !pace || !slider || !reading || !chart) return;
  const cursor = chart.querySelector<SVGLineElement>('.cursor');
  const perFrame = data.rings * data.spokes;
  let time = data.start;
  let moving = !matchMedia('(prefers-reduced-motion: reduce)').matches;
  let last = 0;

  /** Between two frames, m/s. */
  function valueAt(cell: number, place: number): number {
    const frame = Math.min(Math.floor(place), data.frames - 1);
    const next = Math.min(frame + 1, data.frames - 1);
    const a = cells[frame * perFrame + cell] ?? 0;
    const b = cells[next * perFrame + cell] ?? 0;
    return data.lowest + ((a + (b - a) * (place - frame)) / 255) * (data.highest - data.lowest);
  }

  /** From blue (slower than the middle) over white to vermilion (faster). */
  function colourOf(speed: number): string {
    const share = Math.max(-1, Math.min(1, (speed - data.middle) / data.reach));
    const full = share < 0 ? [0, 114, 178] : [213, 94, 0];
    return `rgb(${full.map((part) => Math.round(248 + (part - 248) * Math.abs(share))).join(',')})`;
  }

  function draw(): void {
    if (!canvas || !pen || !reading || !chart || !slider) return;
    const size = canvas.width;
    const middle = size / 2;
    const radius = 0.46 * size;
    const place = Math.max(0, Math.min(data.frames - 1, time * data.rate));
    pen.clearRect(0, 0, size, size);
    let low = Number.POSITIVE_INFINITY;
    let high = Number.NEGATIVE_INFINITY;
    const sector = (2 * Math.PI) / data.spokes;
    for (let ring = data.rings - 1; ring >= 0; ring--) {
      for (let spoke = 0; spoke < data.spokes; spoke++) {
        const speed = valueAt(ring * data.spokes + spoke, place);
        low = Math.min(low, speed);
        high = Math.max(high, speed);
        // Azimuth 0 is up, and the rotor turns clockwise for one who looks downwind.
        const from = spoke * sector - Math.PI / 2;
        pen.fillStyle = pen.strokeStyle = colourOf(speed);
        pen.beginPath();
        pen.arc(middle, middle, (radius * (ring + 1)) / data.rings, from, from + sector);
        pen.lineTo(middle, middle);
        pen.closePath();
        pen.fill();
        pen.stroke();
      }
    }
    pen.strokeStyle = '#17212b';
    pen.lineWidth = size / 140;
    pen.lineCap = 'round';
    for (let blade = 0; blade < data.bladeCount; blade++) {
      const azimuth = data.rotorSpeed * time + (2 * Math.PI * blade) / data.bladeCount;
      pen.beginPath();
      pen.moveTo(middle, middle);
      pen.lineTo(middle + radius * Math.sin(azimuth), middle - radius * Math.cos(azimuth));
      pen.stroke();
    }
    pen.lineWidth = 1;
    const frame = Math.round(place);
    const turned = data.direction?.[frame] ?? 0;
    const side = turned < 0 ? 'right' : 'left';
    reading.textContent =
      `${time.toFixed(1)} s: hub ${(data.hub[frame] ?? 0).toFixed(1)} m/s, rotor mean ${(data.rotorMean[frame] ?? 0).toFixed(1)} m/s, ` +
      `${low.toFixed(1)} to ${high.toFixed(1)} m/s over the disc` +
      (Math.abs(turned) < 0.05 ? '' : `, turned ${Math.abs(turned).toFixed(0)}° to the ${side}`);
    slider.value = String(time);
    const { left = '0', width = '1' } = chart.dataset;
    const x = String(Number(left) + (time / data.duration) * Number(width));
    cursor?.setAttribute('x1', x);
    cursor?.setAttribute('x2', x);
  }

  function show(moves: boolean): void {
    moving = moves;
    if (play) play.textContent = moving ? 'Pause' : 'Play';
    last = 0;
    if (moving) requestAnimationFrame(step);
  }

  function step(now: number): void {
    if (!moving) return;
    if (last > 0) time += Math.min(0.2, (now - last) / 1000) * Number(pace?.value ?? 1);
    if (time > data.duration) time = 0;
    last = now;
    draw();
    requestAnimationFrame(step);
  }

  play.addEventListener('click', () => show(!moving));
  slider.addEventListener('input', () => {
    time = Number(slider.value);
    draw();
  });
  chart.addEventListener('click', (event) => {
    const box = chart.getBoundingClientRect();
    const { left = '0', width = '1', total = '1' } = chart.dataset;
    const at = ((event.clientX - box.left) / box.width) * Number(total);
    time = Math.max(0, Math.min(data.duration, ((at - Number(left)) / Number(width)) * data.duration));
    draw();
  });
  draw();
  show(moving);
}
