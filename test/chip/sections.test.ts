import { expect, test } from 'vitest';
import { channelForm, SectionList } from '../../src/chip/sections.ts';
import { sectionForm } from '../../src/physics/section.ts';

test('a chip keeps each profile, width and depth once, in metres; what is not known has no section', () => {
  const list = new SectionList();
  const of = [
    list.indexOf('rectangle', 0.2, 0.05),
    list.indexOf('isotropic', 0.2, 0.05),
    list.indexOf('rectangle', 0.05, 0.2),
    list.indexOf('rectangle', 0.2, 0.05),
    list.indexOf('rectangle', 0.2, Number.NaN),
    list.indexOf('isotropic', Number.NaN, 0.05),
  ];
  expect(of).toEqual([0, 1, 2, 0, -1, -1]);
  expect(list.forms).toEqual([
    sectionForm('rectangle', 0.2e-3, 0.05e-3),
    sectionForm('isotropic', 0.2e-3, 0.05e-3),
    sectionForm('rectangle', 0.05e-3, 0.2e-3),
  ]);
  const chip = { channels: of.map((section) => ({ section })), sections: list.forms };
  expect(channelForm(chip, 2)).toBe(list.forms[2]);
  expect(channelForm(chip, 4)).toBeNull();
});
