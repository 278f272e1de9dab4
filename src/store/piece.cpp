#include "store/piece.hpp"

#include <cassert>
#include <utility>

#include "store/canonical.hpp"
#include "store/error.hpp"
#include "store/value_text.hpp"

namespace scourbook::store {
namespace {

[[noreturn]] void fail(const Piece& piece, const std::string& what) {
  throw StoreError(StoreError::Kind::damaged, "stage piece " + std::to_string(piece.id) + ": " + what);
}

/// Runs `read`; what is wrong with a list is said with the piece's number.
template <class Read>
auto reading(const Piece& piece, Read read) -> decltype(read()) {
  try {
    return read();
  } catch (const StoreError& error) {
    fail(piece, error.what());
  }
}

void check_shape(const Piece& piece, const PieceValues& values) {
  if (static_cast<std::int64_t>(values.value.size()) != piece.count) {
    fail(piece, "it holds another number of values than it says");
  }
  const bool inside = values.time_ms.empty() || (values.time_ms.front() >= piece.span_first_ms &&
                                                 values.time_ms.back() <= piece.span_last_ms);
  if (!inside) fail(piece, "it holds readings outside its span");
}

}  // namespace

const char* word(StageUnit unit) {
  return unit == StageUnit::metre ? "m" : "ft";
}

StageUnit parse_unit(const std::string& text) {
  if (text == "m") return StageUnit::metre;
  if (text == "ft") return StageUnit::foot;
  throw StoreError(StoreError::Kind::damaged, "a stage piece has an unknown unit: " + text);
}

void encode(const std::vector<PieceReading>& readings, Piece& piece) {
  std::vector<std::int64_t> times, values;
  std::vector<Quality> qualities;
  std::vector<Place> places;
  for (const PieceReading& reading : readings) {
    times.push_back(reading.time_ms);
    values.push_back(reading.value);
    qualities.push_back(reading.quality);
    places.push_back({reading.file, reading.line});
  }
  ValueText text = values_text(times, values);
  piece.count = static_cast<std::int64_t>(readings.size());
  piece.first_ms = readings.empty() ? piece.span_first_ms : text.first_ms;
  piece.step_ms = text.step_ms;
  piece.values = std::move(text.json);
  piece.quality_runs = quality_runs_json(qualities);
  piece.line_runs = line_runs_json(places);
}

PieceValues decode(const Piece& piece) {
  return reading(piece, [&] {
    TimedValues timed = parse_values(piece.values, piece.first_ms, piece.step_ms);
    PieceValues out{std::move(timed.time_ms), std::move(timed.value), {}};
    out.quality = parse_quality_runs(piece.quality_runs, out.value.size());
    check_shape(piece, out);
    return out;
  });
}

std::vector<PieceReading> readings_of(const Piece& piece) {
  const PieceValues values = decode(piece);
  const auto places = reading(piece, [&] { return parse_line_runs(piece.line_runs, values.value.size()); });
  std::vector<PieceReading> readings(values.value.size());
  for (std::size_t i = 0; i < readings.size(); ++i) {
    readings[i] = {values.time_ms[i], values.value[i], values.quality[i], places[i].file, places[i].line};
  }
  return readings;
}

std::string digest_of(const Piece& p) {
  Sha256 digest;
  const auto number = [&](std::int64_t value) { digest.add("i" + std::to_string(value) + ","); };
  const auto text = [&](const std::string& value) {
    digest.add("t" + std::to_string(value.size()) + ":");
    digest.add(value);
    digest.add(",");
  };
  number(p.id);
  number(p.act);
  text(p.station);
  number(p.month);
  number(p.merged ? 1 : 0);
  number(p.file);
  for (std::int64_t value : {p.span_first_ms, p.span_last_ms, p.first_ms, p.step_ms, p.count}) number(value);
  text(word(p.unit));
  number(p.decimals);
  text(p.values);
  text(p.quality_runs);
  text(p.line_runs);
  return digest.hex();
}

std::int64_t ticks_of(std::int64_t value, StageUnit unit, int decimals) {
  static constexpr std::int64_t kTen[] = {1,       10,        100,        1'000,      10'000,
                                          100'000, 1'000'000, 10'000'000, 100'000'000};
  assert(decimals >= 0 && decimals <= 8);
  if (value == kMissing) return kMissing;
  // Metres are whole ticks; a 128-bit product is far slower than a decade of stage should take.
  constexpr std::int64_t kSafe = INT64_MAX / 100'000'000;
  if (unit == StageUnit::metre && value > -kSafe && value < kSafe) return value * kTen[8 - decimals];
  // value x (ticks of the unit) / 10^decimals, exact but for the one rounding, halves away from zero.
  __extension__ using Wide = __int128;
  const std::int64_t ticks = unit == StageUnit::metre ? kTen[8] : kTicksPerFoot;
  Wide numerator = static_cast<Wide>(value) * ticks;
  const Wide denominator = kTen[decimals];
  const bool negative = numerator < 0;
  if (negative) numerator = -numerator;
  const Wide rounded = (2 * numerator + denominator) / (2 * denominator);
  return static_cast<std::int64_t>(negative ? -rounded : rounded);
}

}  // namespace scourbook::store
