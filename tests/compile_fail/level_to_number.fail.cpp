// A level becomes a number only with its unit named.
// refused: cannot convert|no viable conversion
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  double metres = level;
  return metres;
}
