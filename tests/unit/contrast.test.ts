import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

/** WCAG 2.2, success criteria 1.4.3 (text, 4.5) and 1.4.11 (marks, 3); relative luminance as defined there. */
const css = readFileSync(new URL('../../src/styles.css', import.meta.url), 'utf8');

const token = /--wm-(\w+):\s*light-dark\((#[0-9a-f]{6}),\s*(#[0-9a-f]{6})\);/g;
const found = [...css.matchAll(token)].map(([, name = '', light = '', dark = '']) => ({
  name,
  light,
  dark,
}));
const themes = {
  light: Object.fromEntries(found.map(({ name, light }) => [name, light])),
  dark: Object.fromEntries(found.map(({ name, dark }) => [name, dark])),
};

function luminance(hex: string): number {
  const [red = 0, green = 0, blue = 0] = [1, 3, 5]
    .map((place) => parseInt(hex.slice(place, place + 2), 16) / 255)
    .map((part) => (part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4));
  return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
}

function contrast(one: string, other: string): number {
  const [light = 0, dark = 0] = [luminance(one), luminance(other)].sort((a, b) => b - a);
  return (light + 0.05) / (dark + 0.05);
}

const texts = [
  ['ink', 'paper'],
  ['ink', 'panel'],
  ['ink', 'white'],
  ['ink', 'mist'],
  ['ink', 'driftwash'],
  ['soft', 'paper'],
  ['soft', 'panel'],
  ['soft', 'mist'],
  ['soft', 'white'],
  ['over', 'panel'],
  ['over', 'paper'],
  ['drift', 'panel'],
  ['panel', 'ink'],
  ['panel', 'water'],
  ['panel', 'over'],
] as const;
const marks = [
  ['water', 'panel'],
  ['water', 'paper'],
  ['water', 'white'],
  ['ink', 'wash'],
  ['ink', 'white'],
  ['slate', 'panel'],
  ['over', 'panel'],
  ['drift', 'panel'],
] as const;

describe.each(Object.entries(themes))('the %s theme', (_, tokens) => {
  it.each(texts)('%s on %s is read as text', (front, ground) => {
    expect(contrast(tokens[front] ?? '', tokens[ground] ?? '')).toBeGreaterThanOrEqual(4.5);
  });

  it.each(marks)('%s on %s is seen as a mark', (front, ground) => {
    expect(contrast(tokens[front] ?? '', tokens[ground] ?? '')).toBeGreaterThanOrEqual(3);
  });

  it('has every token', () => {
    expect(Object.keys(tokens)).toHaveLength(14);
    expect(css.match(/--wm-\w+:/g)).toHaveLength(14);
  });
});
