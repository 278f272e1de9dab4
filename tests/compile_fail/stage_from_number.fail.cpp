// A number has no unit.
// refused: no matching function|no viable|could not convert|cannot convert|conversion from|is private
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  stage = Stage(1.25);
  return stage;
}
