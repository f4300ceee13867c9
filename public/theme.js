// Runs before the first paint so that a darkened room never sees a bright frame. The key is shared with app/stores/theme.ts.
try {
  if (localStorage.getItem('dawnward.room') === 'dim') document.documentElement.setAttribute('data-theme', 'dim')
}
catch {
  // Storage may be closed to us; the light theme is then the right one.
}
