export * from '@/server/contract/capture';
export * from '@/server/contract/common';
export * from '@/server/contract/findings';
export * from '@/server/contract/hub';
export * from '@/server/contract/live';
export * from '@/server/contract/rig';
export * from '@/server/contract/session';
export * from '@/server/contract/settings';
