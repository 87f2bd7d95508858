// Sets the reader's fixed scheme before the first paint, so that nothing flashes.
try {
  const { scheme } = JSON.parse(localStorage.getItem('turnmark.preferences') ?? '{}');
  if (scheme === 'steel' || scheme === 'dye') document.documentElement.dataset.scheme = scheme;
} catch {
  // Without storage the system's scheme holds.
}
