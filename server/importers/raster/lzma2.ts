/*
 * LZMA2 (the coder inside .xz files), decoded into one output array that is also the dictionary.
 * Written from the published description of the format: LZMA specification (I. Pavlov, public domain), 2015.
 */

import { newModels, type Models } from './lzmaModels.ts';

const MATCH_LITERAL = new Uint8Array([0, 0, 0, 0, 1, 2, 3, 4, 5, 6, 4, 5]);

/** Decodes chunks until the end mark or until `size` bytes are there. Throws on damaged data. */
export class Lzma2Decoder {
  readonly out: Uint8Array<ArrayBuffer>;
  done = 0;
  /** Place in the input after the last chunk read. */
  at: number;
  private readonly input: Uint8Array;
  private range = 0;
  private code = 0;
  private inputEnd = 0;
  private state = 0;
  private reps: [number, number, number, number] = [0, 0, 0, 0];
  private lc = 0;
  private lpMask = 0;
  private pbMask = 0;
  private models: Models | null = null;

  constructor(input: Uint8Array, at: number, size: number) {
    this.input = input;
    this.at = at;
    this.out = new Uint8Array(size);
  }

  run(): void {
    for (;;) {
      const control = this.byte();
      if (control === 0) return;
      if (control < 0x80) this.copyChunk(control);
      else this.codedChunk(control);
      if (this.done >= this.out.length) return;
    }
  }

  private byte(): number {
    if (this.at >= this.input.length) throw new RangeError('LZMA data end too early');
    return this.input[this.at++]!;
  }

  private copyChunk(control: number): void {
    if (control > 2) throw new RangeError('LZMA chunk of unknown kind');
    const length = (this.byte() << 8) + this.byte() + 1;
    if (this.at + length > this.input.length) throw new RangeError('LZMA data end too early');
    const kept = Math.min(length, this.out.length - this.done);
    this.out.set(this.input.subarray(this.at, this.at + kept), this.done);
    this.done += kept;
    this.at += length;
  }

  private codedChunk(control: number): void {
    const unpacked = ((control & 0x1f) << 16) + (this.byte() << 8) + this.byte() + 1;
    const packed = (this.byte() << 8) + this.byte() + 1;
    const reset = (control >> 5) & 3;
    if (reset >= 2) this.setProperties(this.byte());
    else if (reset === 1) this.resetState();
    if (this.models === null) throw new RangeError('LZMA chunk without properties');
    this.inputEnd = Math.min(this.input.length, this.at + packed);
    const next = this.at + packed;
    this.range = 0xffffffff;
    this.at++;
    this.code = ((this.byte() << 24) | (this.byte() << 16) | (this.byte() << 8) | this.byte()) >>> 0;
    this.decode(Math.min(this.out.length, this.done + unpacked));
    this.at = next;
  }

  private setProperties(properties: number): void {
    if (properties >= 225) throw new RangeError('LZMA properties out of range');
    this.lc = properties % 9;
    const rest = Math.floor(properties / 9);
    this.lpMask = (1 << (rest % 5)) - 1;
    this.pbMask = (1 << Math.floor(rest / 5)) - 1;
    if (this.lc + (rest % 5) > 4) throw new RangeError('LZMA properties out of range');
    this.resetState();
  }

  private resetState(): void {
    this.state = 0;
    this.reps = [0, 0, 0, 0];
    this.models = newModels(this.lc + (32 - Math.clz32(this.lpMask)));
  }

  private bit(model: Uint16Array, index: number): number {
    const p = model[index]!;
    const bound = (this.range >>> 11) * p;
    let symbol: number;
    if (this.code < bound) {
      this.range = bound;
      model[index] = p + ((2048 - p) >> 5);
      symbol = 0;
    } else {
      this.range -= bound;
      this.code -= bound;
      model[index] = p - (p >> 5);
      symbol = 1;
    }
    if (this.range < 0x1000000) this.normalise();
    return symbol;
  }

  private normalise(): void {
    this.range = (this.range << 8) >>> 0;
    const next = this.at < this.inputEnd ? this.input[this.at]! : 0;
    this.at++;
    this.code = ((this.code << 8) | next) >>> 0;
  }

  private direct(bits: number): number {
    let value = 0;
    for (let i = 0; i < bits; i++) {
      this.range >>>= 1;
      const one = this.code >= this.range ? 1 : 0;
      if (one === 1) this.code -= this.range;
      if (this.range < 0x1000000) this.normalise();
      value = value * 2 + one;
    }
    return value;
  }

  private tree(model: Uint16Array, base: number, bits: number): number {
    let symbol = 1;
    for (let i = 0; i < bits; i++) symbol = symbol * 2 + this.bit(model, base + symbol);
    return symbol - (1 << bits);
  }

  private reverseTree(model: Uint16Array, base: number, bits: number): number {
    let symbol = 1;
    let value = 0;
    for (let i = 0; i < bits; i++) {
      const one = this.bit(model, base + symbol);
      symbol = symbol * 2 + one;
      value += one << i;
    }
    return value;
  }

  /** Lengths: 2 choice bits, then 8 low and 8 middle per position, then 256 high. */
  private matchLength(model: Uint16Array, position: number): number {
    if (this.bit(model, 0) === 0) return 2 + this.tree(model, 2 + position * 8, 3);
    if (this.bit(model, 1) === 0) return 10 + this.tree(model, 130 + position * 8, 3);
    return 18 + this.tree(model, 258, 8);
  }

  private literal(models: Models): void {
    const previous = this.done > 0 ? this.out[this.done - 1]! : 0;
    const base = 0x300 * (((this.done & this.lpMask) << this.lc) + (previous >> (8 - this.lc)));
    let symbol = 1;
    if (this.state >= 7) {
      let matched = this.out[this.done - this.reps[0] - 1]!;
      while (symbol < 0x100) {
        const want = (matched >> 7) & 1;
        matched <<= 1;
        const got = this.bit(models.literal, base + ((1 + want) << 8) + symbol);
        symbol = symbol * 2 + got;
        if (got !== want) break;
      }
    }
    while (symbol < 0x100) symbol = symbol * 2 + this.bit(models.literal, base + symbol);
    this.out[this.done++] = symbol & 0xff;
    this.state = MATCH_LITERAL[this.state]!;
  }

  private distance(models: Models, length: number): number {
    const slot = this.tree(models.slot, Math.min(length - 2, 3) * 64, 6);
    if (slot < 4) return slot;
    const bits = (slot >> 1) - 1;
    const base = (2 | (slot & 1)) * 2 ** bits;
    if (slot < 14) return base + this.reverseTree(models.special, base - slot, bits);
    return base + this.direct(bits - 4) * 16 + this.reverseTree(models.align, 0, 4);
  }

  /** One of the four last distances; brings it to the front. Returns the length to copy. */
  private repeated(models: Models, position: number): number {
    const state = this.state;
    if (this.bit(models.isRep0, state) === 0) {
      if (this.bit(models.isRep0Long, (state << 4) + position) === 0) {
        this.state = state < 7 ? 9 : 11;
        return 1;
      }
    } else {
      const pick = this.bit(models.isRep1, state) === 0 ? 1 : this.bit(models.isRep2, state) === 0 ? 2 : 3;
      const found = this.reps[pick];
      for (let i = pick; i > 0; i--) this.reps[i] = this.reps[i - 1]!;
      this.reps[0] = found;
    }
    this.state = state < 7 ? 8 : 11;
    return this.matchLength(models.repLength, position);
  }

  private decode(end: number): void {
    const models = this.models!;
    while (this.done < end) {
      const position = this.done & this.pbMask;
      if (this.bit(models.isMatch, (this.state << 4) + position) === 0) {
        this.literal(models);
        continue;
      }
      let length: number;
      if (this.bit(models.isRep, this.state) === 0) {
        length = this.matchLength(models.matchLength, position);
        this.reps = [this.distance(models, length), this.reps[0], this.reps[1], this.reps[2]];
        this.state = this.state < 7 ? 7 : 10;
      } else {
        length = this.repeated(models, position);
      }
      const from = this.done - this.reps[0] - 1;
      if (from < 0) throw new RangeError('LZMA copy from before the start');
      const stop = Math.min(end, this.done + length);
      for (let i = from; this.done < stop; ) this.out[this.done++] = this.out[i++]!;
    }
  }
}
