#include <bit>
#include <cmath>
#include <type_traits>

#include "replay/flow_block.hpp"
#include "store/book.hpp"

namespace scourbook::replay {
namespace {

constexpr std::uint64_t kOneNaN = 0x7ff8000000000000;  // the one that stands for all

/// Appends the bytes of an integer, the lowest first.
template <class Integer>
void put(std::string& bytes, Integer value) {
  auto rest = static_cast<std::make_unsigned_t<Integer>>(value);
  for (std::size_t i = 0; i < sizeof(Integer); ++i) {
    bytes.push_back(static_cast<char>(rest & 0xff));
    rest = static_cast<decltype(rest)>(rest >> 8);
  }
}

}  // namespace

std::string digest(const FlowBlock& block) {
  static_assert(sizeof(int) == 4 && sizeof(Flags) == 2);
  std::string bytes;
  bytes.reserve(block.time_ms.size() * 22);
  for (std::size_t i = 0; i < block.time_ms.size(); ++i) {
    const double discharge = block.discharge_m3s[i];
    put(bytes, block.time_ms[i]);
    put(bytes, std::isnan(discharge) ? kOneNaN : std::bit_cast<std::uint64_t>(discharge));
    put(bytes, block.flags[i]);
    put(bytes, block.curve[i]);
  }
  return store::sha256_hex(bytes);
}

}  // namespace scourbook::replay
