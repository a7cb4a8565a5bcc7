export * from './act';
export * from './bay';
export * from './change';
export * from './node';
export * from './people';
export * from './site';
export * from './system';
export * from './visit';
