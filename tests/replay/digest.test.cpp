#include <catch2/catch.hpp>
#include <cmath>

#include "replay/flow_block.hpp"

using namespace scourbook;

namespace {

replay::FlowBlock small_block() {
  replay::FlowBlock block;
  block.time_ms = {1577836800000, 1577837700000, -1};
  block.discharge_m3s = {12.5, std::nan(""), 0.0};
  block.flags = {bit(Flag::above_gauged), bit(Flag::gap), Flags{0xffff}};
  block.curve = {3, 0, 70000};
  return block;
}

}  // namespace

// The bytes were packed and digested apart from this program, by Python's struct ("<qQHi" for each reading)
// and hashlib.
TEST_CASE("the digest is that of the packed rows") {
  CHECK(replay::digest(small_block()) == "588fd2ba6150d4a9b1254d8291ed6614f6d20527fde07dee5716d634eb43ab5a");
  CHECK(replay::digest({}) ==
        "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");  // SHA-256 of nothing
}

TEST_CASE("all NaNs are one, and every other bit counts") {
  const std::string digest = replay::digest(small_block());
  auto block = small_block();
  block.discharge_m3s[1] = -std::nan("7");
  CHECK(replay::digest(block) == digest);
  block.discharge_m3s[0] = std::nextafter(12.5, 13);
  CHECK(replay::digest(block) != digest);
  block = small_block();
  block.flags[0] = 0;
  CHECK(replay::digest(block) != digest);
  block = small_block();
  block.curve[2] = 70001;
  CHECK(replay::digest(block) != digest);
}
