/** V8 to its minor version: sin, cos and exp of the tests may differ in the last bit between engines. */
export const ENGINE = `V8 ${process.versions.v8.split('.').slice(0, 2).join('.')}`;
