declare module 'js-quantities' {
  interface Quantity {
    to(unit: string): Quantity;
    isCompatible(other: Quantity): boolean;
    readonly scalar: number;
  }
  export default function Qty(scalar: number, unit: string): Quantity;
}
