import type { Operator, SparseMatrix } from '../emitter/operators.js';
import { jumpMap, leftMaps } from '../emitter/operators.js';

/**
 * A set of emitter operators ("blocks") that all obey dX/dt = L(t)X − (damping + i·rotation)X + sources from
 * other blocks. Photon counting and the filtered moments are both of this form. A block is stored as one
 * coordinate vector if it stays Hermitian, as two (X + iY) otherwise; each vector is a "lane" of the propagator.
 */
export interface Block {
  readonly lane: number;
  readonly hermitian: boolean;
  /** 1/ps. */
  readonly damping: number;
  /** 1/ps. */
  readonly rotation: number;
}

/** dX_to/dt gains factor · matrix · X_from; matrix −1 is the identity. */
export interface Coupling {
  readonly matrix: number;
  readonly factor: number;
  readonly from: number;
  readonly to: number;
}

/** Figure = Tr of a block when all light is out, times a factor. */
export interface Target {
  readonly name: string;
  readonly block: number;
  readonly factor: number;
}

export interface Hierarchy {
  readonly blocks: readonly Block[];
  readonly lanes: number;
  readonly matrices: readonly SparseMatrix[];
  readonly couplings: readonly Coupling[];
  readonly targets: readonly Target[];
  /** Blocks that start as the ground-state density operator; all others start at zero. */
  readonly seeded: readonly number[];
}

/** Collects blocks and couplings; block 0 is always ρ. */
export class HierarchyBuilder {
  private readonly blocks: Block[] = [];
  private readonly matrices: SparseMatrix[] = [];
  private readonly couplings: Coupling[] = [];
  private readonly targets: Target[] = [];
  private readonly seeded: number[] = [];
  private lanes = 0;

  constructor() {
    this.addBlock(true, 0, 0);
    this.seed(0);
  }

  addBlock(hermitian: boolean, damping: number, rotation: number): number {
    this.blocks.push({ lane: this.lanes, hermitian, damping, rotation });
    this.lanes += hermitian ? 1 : 2;
    return this.blocks.length - 1;
  }

  seed(block: number): void {
    this.seeded.push(block);
  }

  target(name: string, block: number, factor: number): void {
    this.targets.push({ name, block, factor });
  }

  /** Registers X ↦ Σ cXc† over the collected modes. */
  addJump(dipoles: readonly Operator[]): number[] {
    return dipoles.map((c) => this.matrices.push(jumpMap(c)) - 1);
  }

  /** Registers left multiplication by c. */
  addLeft(c: Operator): { p: number; q: number } {
    const { p, q } = leftMaps(c);
    return { p: this.matrices.push(p) - 1, q: this.matrices.push(q) - 1 };
  }

  /** Source factor · M X_from, with a real matrix, or the identity (−1). Hermitian blocks only hand over their X. */
  couple(matrix: number, factor: number, from: number, to: number): void {
    const a = this.blocks[from];
    const b = this.blocks[to];
    this.couplings.push({ matrix, factor, from: a.lane, to: b.lane });
    if (!b.hermitian && !a.hermitian) {
      this.couplings.push({ matrix, factor, from: a.lane + 1, to: b.lane + 1 });
    }
  }

  /** Source factor · X_from†. */
  coupleConjugate(factor: number, from: number, to: number): void {
    const a = this.blocks[from];
    const b = this.blocks[to];
    this.push(-1, factor, a.lane, b.lane);
    if (!b.hermitian && !a.hermitian) this.push(-1, -factor, a.lane + 1, b.lane + 1);
  }

  /**
   * Source factor · c X (side +1) or factor · X c† (side −1), where X is the stored block or its adjoint.
   * With c = P + iQ on Hermitian parts: cX = (PX − QY) + i(QX + PY), Xc† = (PX + QY) + i(PY − QX).
   */
  coupleDipole(
    maps: { p: number; q: number },
    side: 1 | -1,
    factor: number,
    from: number,
    conjugate: boolean,
    to: number,
  ): void {
    const a = this.blocks[from];
    const b = this.blocks[to];
    const y = conjugate ? -factor : factor;
    this.push(maps.p, factor, a.lane, b.lane);
    if (!a.hermitian) this.push(maps.q, -side * y, a.lane + 1, b.lane);
    if (b.hermitian) return;
    this.push(maps.q, side * factor, a.lane, b.lane + 1);
    if (!a.hermitian) this.push(maps.p, y, a.lane + 1, b.lane + 1);
  }

  build(): Hierarchy {
    return {
      blocks: this.blocks,
      lanes: this.lanes,
      matrices: this.matrices,
      couplings: this.couplings,
      targets: this.targets,
      seeded: this.seeded,
    };
  }

  private push(matrix: number, factor: number, from: number, to: number): void {
    this.couplings.push({ matrix, factor, from, to });
  }
}
