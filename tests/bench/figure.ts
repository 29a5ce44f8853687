/** One figure of the benchmark. `met` is null where there is no target or the peer is missing. */
export interface Figure {
  name: string;
  value: number;
  unit: string;
  peer: string;
  peerValue: number | null;
  ratio: number | null;
  target: number | null;
  met: boolean | null;
}
