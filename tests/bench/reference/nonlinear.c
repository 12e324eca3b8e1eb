#include "model.h"
void nonlinear_step(model *m, const double *factors) {
  (void)m;
  (void)factors;
}
