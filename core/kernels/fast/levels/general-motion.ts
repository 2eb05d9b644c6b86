import type { Span } from '../spans.js';
import { UnitaryStep } from '../unitary-step.js';
import type { Course, Motion } from './motion.js';

/** Outermost node of three-point Gauss–Legendre quadrature on a step of length 1, from its middle. */
const NODE = Math.sqrt(15) / 10;

/** Steps of any scheme and polarisation, in the frame of the request or of the line. */
export class GeneralMotion implements Motion {
  readonly three = null;
  private readonly step: UnitaryStep;
  private readonly all: { readonly re: Float64Array; readonly im: Float64Array };
  private segment: number;

  constructor(
    private readonly course: Course,
    used: readonly boolean[],
  ) {
    const { request, energies, h, span } = course;
    this.step = new UnitaryStep(request.scheme, energies, request.drive, h, used);
    const size = energies.length ** 2;
    this.all = { re: new Float64Array(size), im: new Float64Array(size) };
    this.segment = span.first;
  }

  advance(n: number): void {
    const { course, step, all } = this;
    const { span, h, request, line } = course;
    const { breakpoints } = request.drive;
    const t = span.start + (n + 0.5) * h;
    this.segment = segmentAt(breakpoints, span, this.segment, t - NODE * h);
    const middle = segmentAt(breakpoints, span, this.segment, t);
    step.advance(t, this.segment, middle, segmentAt(breakpoints, span, middle, t + NODE * h));
    all.re.set(step.re);
    all.im.set(step.im);
    if (line === null) return;
    const { levels } = request.scheme;
    levels.forEach(({ excitons: up }, i) => {
      levels.forEach(({ excitons: down }, j) => {
        const angle = line * (up * (t + 0.5 * h) - down * (t - 0.5 * h));
        const c = Math.cos(angle);
        const s = Math.sin(angle);
        const k = i * levels.length + j;
        all.re[k] = c * step.re[k] - s * step.im[k];
        all.im[k] = s * step.re[k] + c * step.im[k];
      });
    });
  }

  full(): { readonly re: Float64Array; readonly im: Float64Array } {
    return this.all;
  }

  driveAfter(n: number, out: Float64Array): void {
    const { span, h, request, line } = this.course;
    const { breakpoints } = request.drive;
    const t = span.start + (n + 1) * h;
    request.drive.sample(t, segmentAt(breakpoints, span, this.segment, t), out);
    if (line === null) return;
    const c = Math.cos(line * t);
    const s = Math.sin(line * t);
    for (let k = 0; k < out.length; k += 2) {
      const x = out[k];
      out[k] = c * x - s * out[k + 1];
      out[k + 1] = s * x + c * out[k + 1];
    }
  }
}

function segmentAt(breakpoints: Float64Array, span: Span, from: number, t: number): number {
  let s = from;
  while (s < span.last && t >= breakpoints[s + 1]) s++;
  return s;
}
