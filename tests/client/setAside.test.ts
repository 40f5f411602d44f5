import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import { defineComponent, h } from 'vue';
import { useSetAside } from '../../src/composables/useSetAside.ts';

/** A screen of one person with work on it; closing it leaves by force or not. */
function open(of: string, { work = null as string | null, isLeftByForce = true } = {}) {
  const found: (string | null)[] = [];
  const screen = mount(defineComponent(() => {
    const { takeBack } = useSetAside({ of: () => of, isLeftByForce: () => isLeftByForce, work: () => work });
    found.push(takeBack());
    return () => h('p');
  }));
  screen.unmount();
  return found[0];
}

describe('work set aside while its person signs in again', () => {
  it('comes back once, to the same thing and person', () => {
    open('zones ada', { work: 'a line' });
    expect(open('zones bert')).toBeNull();
    expect(open('other zones ada')).toBeNull();
    expect(open('zones ada')).toBe('a line');
    expect(open('zones ada')).toBeNull();
  });

  it('is not kept when its person leaves freely', () => {
    open('zones ada', { work: 'a line', isLeftByForce: false });
    expect(open('zones ada')).toBeNull();
  });
});
