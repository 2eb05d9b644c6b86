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

  /** @param parts steps of the expansion per step of the motion */
  constructor(
    private readonly course: Course,
    used: readonly boolean[],
    private readonly parts: number,
  ) {
    const { request, energies, h, span } = course;
    this.step = new UnitaryStep(request.scheme, energies, request.drive, h / parts, used);
    const size = energies.length ** 2;
    this.all = { re: new Float64Array(size), im: new Float64Array(size) };
    this.segment = span.first;
  }

  advance(n: number): void {
    const { course, step, all, parts } = this;
    const { span, h, request, line, energies } = course;
    const { breakpoints } = request.drive;
    const part = h / parts;
    const t = span.start + (n + 0.5) * h;
    for (let k = 0; k < parts; k++) {
      const middle = span.start + n * h + (k + 0.5) * part;
      this.segment = segmentAt(breakpoints, span, this.segment, middle - NODE * part);
      const second = segmentAt(breakpoints, span, this.segment, middle);
      const third = segmentAt(breakpoints, span, second, middle + NODE * part);
      step.advance(middle, this.segment, second, third);
      if (k === 0) {
        all.re.set(step.re);
        all.im.set(step.im);
      } else multiplyLeft(step, all, energies.length);
    }
    if (line === null) return;
    const { levels } = request.scheme;
    levels.forEach(({ excitons: up }, i) => {
      levels.forEach(({ excitons: down }, j) => {
        const angle = line * (up * (t + 0.5 * h) - down * (t - 0.5 * h));
        const c = Math.cos(angle);
        const s = Math.sin(angle);
        const k = i * levels.length + j;
        const x = all.re[k];
        all.re[k] = c * x - s * all.im[k];
        all.im[k] = s * x + c * all.im[k];
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

interface ComplexMatrix {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** p ← a·p. */
function multiplyLeft(a: ComplexMatrix, p: ComplexMatrix, n: number): void {
  const x = p.re.slice();
  const y = p.im.slice();
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let re = 0;
      let im = 0;
      for (let k = 0; k < n; k++) {
        re += a.re[i * n + k] * x[k * n + j] - a.im[i * n + k] * y[k * n + j];
        im += a.re[i * n + k] * y[k * n + j] + a.im[i * n + k] * x[k * n + j];
      }
      p.re[i * n + j] = re;
      p.im[i * n + j] = im;
    }
  }
}

function segmentAt(breakpoints: Float64Array, span: Span, from: number, t: number): number {
  let s = from;
  while (s < span.last && t >= breakpoints[s + 1]) s++;
  return s;
}
