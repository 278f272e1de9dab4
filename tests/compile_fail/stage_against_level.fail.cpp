// Heights of different kinds are not compared.
// refused: no match for .operator<|invalid operands
#include "terms/quantity.hpp"

using namespace scourbook;

auto wrong(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  return stage < level;
}
