export type Role = 'reviewer' | 'engineer' | 'admin';

export interface PersonTable {
  id: string;
  email: string;
  email_key: string;
  name: string;
  role: Role;
  password_hash: string | null;
  disabled: 0 | 1;
  created_at_ms: number;
}
