import { ALL_EMPTY, ALL_SOLID, BRICK_VOXELS } from './bricks.ts';

/** Writes the voxels of one brick: solid fraction, damage and age, 512 each. */
export type FillBrick = (solid: Uint8Array, damage: Uint8Array, age: Uint8Array) => void;

/** Growing storage of bricks. */
export class BrickStore {
  count = 0;
  private solid = new Uint8Array(1024 * BRICK_VOXELS);
  private damage = new Uint8Array(1024 * BRICK_VOXELS);
  private age = new Uint8Array(1024 * BRICK_VOXELS);

  /** Fills a new brick; returns its number, or what it is when it turns out uniform and undamaged. */
  add(fill: FillBrick): number {
    const from = this.count * BRICK_VOXELS;
    const to = from + BRICK_VOXELS;
    if (to > this.solid.length) this.grow();
    const solid = this.solid.subarray(from, to);
    const damage = this.damage.subarray(from, to);
    fill(solid, damage, this.age.subarray(from, to));
    const first = solid[0] as number;
    const plain = (first === 0 || first === 255) && solid.every((v) => v === first) && damage.every((v) => v === 0);
    if (plain) return first === 255 ? ALL_SOLID : ALL_EMPTY;
    return this.count++;
  }

  /** What has been stored, brick after brick. */
  finish(): { solid: Uint8Array; damage: Uint8Array; age: Uint8Array } {
    const end = this.count * BRICK_VOXELS;
    return { solid: this.solid.slice(0, end), damage: this.damage.slice(0, end), age: this.age.slice(0, end) };
  }

  private grow(): void {
    const larger = (old: Uint8Array<ArrayBuffer>) => {
      const next = new Uint8Array(old.length * 2);
      next.set(old);
      return next;
    };
    this.solid = larger(this.solid);
    this.damage = larger(this.damage);
    this.age = larger(this.age);
  }
}
