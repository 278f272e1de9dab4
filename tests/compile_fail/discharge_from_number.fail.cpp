// A number has no unit.
// refused: no match for .operator=|no viable overloaded
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  flow = 3.5;
  return flow;
}
