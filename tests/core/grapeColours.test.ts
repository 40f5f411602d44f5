import { describe, expect, it } from 'vitest';
import { grapeColour, otherColour } from '../../shared/catalog/grapeColours.ts';

describe('colour of grapes by the name of the variety', () => {
  it.each([
    ['Viognier', 'white'], ['Müller-Thurgau', 'white'], ['Sauvignon blanc', 'white'], ['GRENACHE BLANC', 'white'], ['Pinot gris', 'white'], ['Xarel·lo', 'white'], ['Alvarinho', 'white'],
    ['Syrah', 'dark'], ['Cabernet Sauvignon', 'dark'], ['Pinot noir', 'dark'], ['Mourvèdre', 'dark'], ['Carmenère', 'dark'], ['Nero d’Avola', 'dark'], ['Tinta Roriz', 'dark'], ['Petit Verdot', 'dark'], ['Sauvignon noir', 'dark'],
  ])('%s is %s', (name, colour) => expect(grapeColour(name)).toBe(colour));

  it('says nothing of a name that it does not know', () => {
    for (const name of ['', 'Field 7', 'Pinot', 'Mixed old vines']) expect(grapeColour(name)).toBeNull();
  });

  it('finds white grapes in red and rosé, and dark ones in white', () => {
    expect([otherColour('Viognier', 'red'), otherColour('Viognier', 'rose'), otherColour('Viognier', 'white')]).toEqual(['white', 'white', null]);
    expect([otherColour('Syrah', 'red'), otherColour('Syrah', 'rose'), otherColour('Syrah', 'white')]).toEqual([null, null, 'dark']);
    expect(otherColour('Field 7', 'white')).toBeNull();
  });
});
