const beforeUnit = /(\d) (?=(?:[µm]?[sV]|[kM]?Hz|rpm(?:\/s)?|mT|ppm|[kM]?S\/s|%|K)(?![A-Za-z]))/g;

/** No line ends between a number and its unit, nor between a sign and its number. */
export function unbroken(text: string): string {
  return text.replace(beforeUnit, '$1\u00a0').replace(/± (?=\d)/g, '±\u00a0');
}
