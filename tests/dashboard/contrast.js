// Texts that stand out too little from their ground: contrast below 4.5 to 1 (WCAG 2.1, 1.4.3), colours as drawn.
const LEFT_OUT = "svg, [disabled], [data-disabled], .hidden-text, .skip, .ag-root-wrapper";
const parse = (text) => (text.match(/[\d.]+/g) || []).map(Number);
const linear = (share) => (share <= 0.03928 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4);
const light = function (colour) {
  const [red, green, blue] = colour.slice(0, 3).map((value) => linear(value / 255));
  return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
};
const ground = function (element) {
  for (let one = element; one; one = one.parentElement) {
    const colour = parse(getComputedStyle(one).backgroundColor);
    if (colour.length === 3 || (colour.length === 4 && colour[3] > 0.99)) return colour;
  }
  return [255, 255, 255];
};
const found = new Set();
const walk = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
while (walk.nextNode()) {
  const text = walk.currentNode.textContent.trim();
  const element = walk.currentNode.parentElement;
  if (!text || !element.offsetParent || element.closest(LEFT_OUT)) continue;
  const [a, b] = [light(parse(getComputedStyle(element).color)), light(ground(element))];
  const ratio = (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
  if (ratio < 4.5) found.add(`${ratio.toFixed(2)} ${element.tagName}.${element.className} ${text.slice(0, 30)}`);
}
return Array.from(found);
