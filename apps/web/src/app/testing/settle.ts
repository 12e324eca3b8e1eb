import type { ComponentFixture } from '@angular/core/testing';

/** Lets what an answer set off run to its end: promises first, then what they changed on screen. */
export async function settle(fixture: ComponentFixture<unknown>): Promise<void> {
  await new Promise((resolve) => setTimeout(resolve));
  await fixture.whenStable();
}
