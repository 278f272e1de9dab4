#pragma once
// What the tests of fieldfile share: reading a text as a file, between two known stations.
#include <catch2/catch.hpp>
#include <string>

#include "fieldfile/parsed.hpp"

namespace scourbook::fieldfile {

/// TAR-1 keeps +01:00, TAR-2 keeps UTC.
inline KnownStations two_stations() {
  KnownStations known;
  known["TAR-1"].offset = UtcOffset{std::chrono::minutes(60)};
  known["TAR-2"].offset = UtcOffset{};
  return known;
}

inline ParsedFile read_text(const std::string& text, const ReadOptions& options = {},
                            const std::string& name = "x.csv") {
  KnownStations known = two_stations();
  MemoryBytes bytes(text);
  return read_records(bytes, name, known, options);
}

/// All findings as people read them.
inline std::string findings_of(const std::string& name, const std::string& text,
                               const ReadOptions& options = {}) {
  return describe(read_text(text, options, name).findings);
}

}  // namespace scourbook::fieldfile
