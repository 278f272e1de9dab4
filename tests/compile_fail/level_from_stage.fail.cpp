// A stage becomes a level only with its gauge zero.
// refused: no match for .operator=|cannot convert|no viable overloaded
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  level = stage;
  return level;
}
