import { type AbstractControl, type FormGroup, type ValidatorFn } from '@angular/forms';
import type * as z from 'zod';
import { type ApiProblem } from './problem';

/** Validates a control with the schema that the server uses; the message is the schema's own sentence. */
export function bySchema(schema: z.ZodType): ValidatorFn {
  return (control: AbstractControl<unknown>) => {
    const parsed = schema.safeParse(control.value);
    return parsed.success ? null : { message: parsed.error.issues[0]?.message ?? 'This value is refused.' };
  };
}

/**
 * Puts the server's message beside each field that it names ("/email" → control "email"); the message goes away when
 * the field changes. Returns the pointers that found their field.
 */
export function showFieldProblems(form: FormGroup, problem: ApiProblem): string[] {
  const shown: string[] = [];
  for (const [pointer, message] of problem.fields) {
    const control = form.get(pointer.split('/').filter(Boolean));
    if (!control) continue;
    control.setErrors({ message });
    control.markAsTouched();
    shown.push(pointer);
  }
  return shown;
}

/** After a refusal: the focus goes to the first field that is wrong, so that its sentence is read and it can be mended. */
export function focusFirstWrong(within: HTMLElement): void {
  within.querySelector<HTMLElement>(':is(input, textarea, select).ng-invalid')?.focus();
}

/** The sentence under a field, or an empty one. */
export function messageOf(control: AbstractControl): string {
  return (control.errors?.['message'] as string | undefined) ?? '';
}
