// Runs before the first paint, so that a page opened with the lamp off never flashes white. Kept a file of its own
// because the content security policy allows no inline script. The choice itself is made in app/lamp.ts.
try {
  const lamp = localStorage.getItem('tautbook.lamp');
  if (lamp === 'on' || lamp === 'off') document.documentElement.dataset.lamp = lamp;
} catch {
  // Storage is closed to this page: the system's own setting decides.
}
