// Before first paint: the ground a person chose. Without a choice, or without storage, the system decides.
(() => {
  let chosen = null;
  try {
    chosen = localStorage.getItem('halfdeep.ground');
  } catch {
    chosen = null; // storage is closed to this page
  }
  if (chosen === 'paper' || chosen === 'ink') document.documentElement.dataset.theme = chosen;
})();
