#include "store/piece.hpp"

#include <algorithm>
#include <nlohmann/json.hpp>

#include "store/canonical.hpp"
#include "store/error.hpp"

namespace scourbook::store {
namespace {

[[noreturn]] void fail(const Piece& piece, const std::string& what) {
  throw StoreError(StoreError::Kind::damaged, "stage piece " + std::to_string(piece.id) + ": " + what);
}

/// The common spacing of the readings, 0 where they have none.
std::int64_t step_of(const std::vector<PieceReading>& readings) {
  if (readings.size() < 2) return 0;
  const std::int64_t step = readings[1].time_ms - readings[0].time_ms;
  for (std::size_t i = 2; i < readings.size(); ++i) {
    if (readings[i].time_ms - readings[i - 1].time_ms != step) return 0;
  }
  return step;
}

std::string irregular_json(const std::vector<PieceReading>& readings) {
  std::string text = "[";
  for (const PieceReading& reading : readings) {
    if (text.size() > 1) text += ',';
    text += integers_json({reading.time_ms - readings.front().time_ms, reading.value});
  }
  return text + "]";
}

std::string quality_json(const std::vector<PieceReading>& readings) {
  nlohmann::json runs = nlohmann::json::array();
  for (std::size_t i = 0; i < readings.size(); ++i) {
    if (i > 0 && readings[i].quality == readings[i - 1].quality) continue;
    runs.push_back({i, std::string(word(readings[i].quality))});
  }
  return runs.dump();
}

std::string lines_json(const std::vector<PieceReading>& readings) {
  nlohmann::json runs = nlohmann::json::array();
  for (std::size_t i = 0; i < readings.size(); ++i) {
    if (i > 0 && readings[i].file == readings[i - 1].file && readings[i].line == readings[i - 1].line + 1)
      continue;
    runs.push_back({static_cast<std::int64_t>(i), readings[i].file, readings[i].line});
  }
  return runs.dump();
}

std::vector<Quality> qualities_of(const Piece& piece, std::size_t count) {
  std::vector<Quality> result;
  for (const auto& run : nlohmann::json::parse(piece.quality_runs)) {
    const auto quality = parse_quality(run.at(1).get<std::string>());
    const std::size_t from = run.at(0);
    if (!quality || from < result.size() || from >= count || (result.empty() && from > 0)) {
      fail(piece, "its qualities cannot be read");
    }
    result.resize(from, result.empty() ? *quality : result.back());
    result.push_back(*quality);
  }
  if (result.empty() && count > 0) fail(piece, "its qualities are missing");
  if (count > 0) result.resize(count, result.back());
  return result;
}

void decode_irregular(const Piece& piece, PieceValues& out) {
  // [[0,948],[900000,null]] is [0,948,900000,null] with more brackets
  std::string flat;
  flat.reserve(piece.values.size());
  for (char c : piece.values) {
    if (c != '[' && c != ']') flat += c;
  }
  const auto numbers = parse_integers("[" + flat + "]");
  if (numbers.size() % 2 != 0) fail(piece, "its values are no pairs");
  for (std::size_t i = 0; i < numbers.size(); i += 2) {
    out.time_ms.push_back(piece.first_ms + numbers[i]);
    out.value.push_back(numbers[i + 1]);
  }
}

void check(const Piece& piece, const PieceValues& values) {
  if (static_cast<std::int64_t>(values.value.size()) != piece.count)
    fail(piece, "it holds another number of values");
  for (std::size_t i = 0; i < values.time_ms.size(); ++i) {
    if (i > 0 && values.time_ms[i] <= values.time_ms[i - 1]) fail(piece, "its times do not rise");
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
  return text == "ft" ? StageUnit::foot : StageUnit::metre;
}

void encode(const std::vector<PieceReading>& readings, Piece& piece) {
  piece.count = static_cast<std::int64_t>(readings.size());
  piece.first_ms = readings.empty() ? piece.span_first_ms : readings.front().time_ms;
  piece.step_ms = step_of(readings);
  if (piece.step_ms > 0) {
    std::vector<std::int64_t> values;
    values.reserve(readings.size());
    for (const PieceReading& reading : readings) values.push_back(reading.value);
    piece.values = integers_json(values);
  } else {
    piece.values = irregular_json(readings);
  }
  piece.quality_runs = quality_json(readings);
  piece.line_runs = lines_json(readings);
}

PieceValues decode(const Piece& piece) {
  PieceValues out;
  try {
    if (piece.step_ms > 0) {
      out.value = parse_integers(piece.values);
      out.time_ms.reserve(out.value.size());
      for (std::size_t i = 0; i < out.value.size(); ++i) {
        out.time_ms.push_back(piece.first_ms + piece.step_ms * static_cast<std::int64_t>(i));
      }
    } else {
      decode_irregular(piece, out);
    }
    check(piece, out);
    out.quality = qualities_of(piece, out.value.size());
  } catch (const nlohmann::json::exception&) {
    fail(piece, "its text cannot be read");
  }
  return out;
}

std::vector<PieceReading> readings_of(const Piece& piece) {
  const PieceValues values = decode(piece);
  std::vector<PieceReading> readings(values.value.size());
  for (std::size_t i = 0; i < readings.size(); ++i) {
    readings[i].time_ms = values.time_ms[i];
    readings[i].value = values.value[i];
    readings[i].quality = values.quality[i];
  }
  try {
    const auto runs = nlohmann::json::parse(piece.line_runs);
    for (std::size_t r = 0; r < runs.size(); ++r) {
      const std::size_t from = runs[r].at(0);
      const std::size_t until = r + 1 < runs.size() ? runs[r + 1].at(0).get<std::size_t>() : readings.size();
      for (std::size_t i = from; i < until && i < readings.size(); ++i) {
        readings[i].file = runs[r].at(1);
        readings[i].line = runs[r].at(2).get<std::int64_t>() + static_cast<std::int64_t>(i - from);
      }
    }
  } catch (const nlohmann::json::exception&) {
    fail(piece, "its lines cannot be read");
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
  for (std::int64_t value : {p.span_first_ms, p.span_last_ms, p.first_ms, p.step_ms, p.count}) number(value);
  text(word(p.unit));
  number(p.decimals);
  text(p.values);
  text(p.quality_runs);
  text(p.line_runs);
  return digest.hex();
}

std::int64_t ticks_of(std::int64_t value, StageUnit unit, int decimals) {
  if (value == kMissing) return kMissing;
  // value x (ticks of the unit) / 10^decimals, in 128 bits: exact but for the one rounding, halves away from
  // zero.
  __extension__ using Wide = __int128;
  Wide numerator =
      static_cast<Wide>(value) * (unit == StageUnit::metre ? Wide{100'000'000} : Wide{kTicksPerFoot});
  Wide denominator = 1;
  for (int i = 0; i < decimals; ++i) denominator *= 10;
  const bool negative = numerator < 0;
  if (negative) numerator = -numerator;
  const Wide rounded = (2 * numerator + denominator) / (2 * denominator);
  return static_cast<std::int64_t>(negative ? -rounded : rounded);
}

}  // namespace scourbook::store
