/**
 * Runs in the page: what a careful eye would find in its measures. Controls under 44 px, drawings squeezed below the size
 * that they were made for, words of a drawing over each other or cut off, short values that break into two lines.
 */
export function flawsInSight(): string[] {
  const targetPx = 44;
  const shortValue = 20;
  const flaws: string[] = [];
  const inSight = (element: Element) => {
    const { width, height } = element.getBoundingClientRect();
    return (
      width > 0 &&
      height > 0 &&
      getComputedStyle(element).visibility !== 'hidden' &&
      element.closest('[aria-hidden="true"]') === null
    );
  };
  const nameOf = (element: Element) =>
    (element.getAttribute('aria-label') ?? element.textContent ?? '').trim().slice(0, 50);
  const controls = 'a, button, select, input, textarea, [role="button"], [role="radio"], [role="slider"]';
  for (const control of document.querySelectorAll(controls)) {
    // A link within a sentence is as high as its line.
    if (!inSight(control) || getComputedStyle(control).display === 'inline') continue;
    const { width, height } = control.getBoundingClientRect();
    if (Math.min(width, height) < targetPx - 0.5)
      flaws.push(`${nameOf(control)} is ${width.toFixed(0)} x ${height.toFixed(0)} px`);
  }
  for (const drawing of document.querySelectorAll('svg[width]')) {
    const made = Number(drawing.getAttribute('width'));
    const box = drawing.getBoundingClientRect();
    if (box.width > 0 && box.width < made - 1)
      flaws.push(`a drawing of ${made} px in ${box.width.toFixed(0)}: ${nameOf(drawing.parentElement!)}`);
    const words = [...drawing.querySelectorAll('text')].map((word) => ({
      text: word.textContent ?? '',
      at: word.getBoundingClientRect(),
    }));
    words.forEach(({ text, at }, i) => {
      if (at.left < box.left - 1 || at.right > box.right + 1) flaws.push(`"${text}" is cut off`);
      for (const other of words.slice(i + 1)) {
        const across = Math.min(at.right, other.at.right) - Math.max(at.left, other.at.left);
        const down = Math.min(at.bottom, other.at.bottom) - Math.max(at.top, other.at.top);
        if (across > 1 && down > 5) flaws.push(`"${text}" stands over "${other.text}"`);
      }
    });
  }
  for (const value of document.querySelectorAll('dd')) {
    const text = value.textContent ?? '';
    const lines =
      value.getBoundingClientRect().height /
      parseFloat(getComputedStyle(value.firstElementChild!).lineHeight);
    if (inSight(value) && text.length <= shortValue && lines > 1.5)
      flaws.push(`"${text}" is broken into lines`);
  }
  return flaws;
}
