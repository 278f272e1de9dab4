// Gauge zero is taken from a level.
// refused: no match for .operator-|invalid operands
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  return stage - zero;
}
