// Gauge zero is added to stage; a level has it already.
// refused: no match for .operator\+|invalid operands
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  return zero + level;
}
