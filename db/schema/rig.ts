export interface RigTable {
  id: string;
  name: string;
  /** JSON of `RigSetup`. */
  setup: string;
  created_at_ms: number;
}
