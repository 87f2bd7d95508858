export interface HubValueTable {
  key: string;
  value: string;
}
