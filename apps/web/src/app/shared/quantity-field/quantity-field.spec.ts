import { ChangeDetectionStrategy, Component, provideZonelessChangeDetection, signal } from '@angular/core';
import { TestBed, type ComponentFixture } from '@angular/core/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { TestKey } from '@angular/cdk/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { QuantityField } from './quantity-field';

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [QuantityField],
  template: `<app-quantity-field
    label="Thickness at rest"
    symbol="H"
    unit="m"
    spokenUnit="metres"
    why="Sets every wave speed."
    [min]="10"
    [max]="5000"
    [refusal]="refusal()"
    [caution]="caution()"
    [(value)]="value"
  />`,
})
class Host {
  readonly value = signal<number | null>(200);
  readonly refusal = signal<string | null>(null);
  readonly caution = signal<string | null>(null);
}

describe('QuantityField', () => {
  let fixture: ComponentFixture<Host>;
  let host: Host;
  let input: MatInputHarness;
  let field: MatFormFieldHarness;

  beforeEach(async () => {
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection()] });
    fixture = TestBed.createComponent(Host);
    host = fixture.componentInstance;
    const loader = TestbedHarnessEnvironment.loader(fixture);
    input = await loader.getHarness(MatInputHarness);
    field = await loader.getHarness(MatFormFieldHarness);
  });

  const type = async (text: string) => {
    const element = await input.host();
    await element.setInputValue(text);
    await element.dispatchEvent('input');
    await fixture.whenStable();
  };
  const press = async (key: TestKey, shift = false) => {
    await (await input.host()).sendKeys({ shift }, key);
    await fixture.whenStable();
  };

  it('shows number and reason, and names its unit for those who hear it', async () => {
    expect(await input.getValue()).toBe('200');
    expect(await field.getTextHints()).toEqual(['Sets every wave speed.']);
    expect(await field.getLabel()).toBe('Thickness at rest, H, metres');
    expect(await (await input.host()).getAttribute('aria-valuetext')).toBe('200 metres');
  });

  it('steps the last digit with the arrows, ten with Shift, and stops at its bounds', async () => {
    await press(TestKey.UP_ARROW);
    expect(host.value()).toBe(201);
    await press(TestKey.DOWN_ARROW, true);
    expect(host.value()).toBe(191);
    await type('0.020');
    await press(TestKey.UP_ARROW);
    expect([await input.getValue(), host.value()]).toEqual(['0.021', 0.021]);
    await type('5000');
    await press(TestKey.UP_ARROW);
    expect(host.value()).toBe(5000);
  });

  it('reads a decimal comma and a true minus', async () => {
    await type('\u221212,5');
    expect(host.value()).toBe(-12.5);
  });

  it('gives null for an empty field and NaN, with the reason, for what is no number', async () => {
    await type('');
    expect(host.value()).toBeNull();
    await type('12a');
    expect(host.value()).toBeNaN();
    expect(await field.getTextErrors()).toEqual(['“12a” is not a number. Write it like 12.5, −3 or 1e−8.']);
    await type('12');
    expect(await field.hasErrors()).toBe(false);
  });

  it('keeps the digits that were typed, and takes another value from outside', async () => {
    await type('0.20');
    expect([await input.getValue(), host.value()]).toEqual(['0.20', 0.2]);
    host.value.set(0.25);
    await fixture.whenStable();
    expect(await input.getValue()).toBe('0.25');
  });

  it('turns its line into the reason when it is refused, and marks a caution without refusing', async () => {
    host.refusal.set('Must be below 5000 m.');
    await fixture.whenStable();
    expect(await field.getTextErrors()).toEqual(['Must be below 5000 m.']);
    expect(await (await input.host()).getAttribute('aria-invalid')).toBe('true');
    host.refusal.set(null);
    host.caution.set('Rather thick.');
    await fixture.whenStable();
    expect(await field.hasErrors()).toBe(false);
    expect(await field.getTextHints()).toEqual(['Rather thick.']);
    const outer = fixture.nativeElement as HTMLElement;
    expect(outer.querySelector('app-quantity-field')?.classList).toContain('hd-cautioned');
  });
});
