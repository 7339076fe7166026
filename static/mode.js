// The mode of this device (day, night, dock-door), set before the first paint. A file of its own, because the
// content security policy lets no script in the page run.
(function () {
  var mode = null;
  try {
    mode = localStorage.getItem('wharfinger-mode');
  } catch (error) {
    // A browser that keeps nothing shows the day.
  }
  if (mode === 'night' || mode === 'dock-door') document.documentElement.setAttribute('data-mode', mode);
})();
