#include "terms/quantity.hpp"

using namespace scourbook;

auto right(Stage stage, Level level, GaugeZero zero, Discharge flow) {
  (void)stage, (void)level, (void)zero, (void)flow;
  return stage + zero < level;
}
