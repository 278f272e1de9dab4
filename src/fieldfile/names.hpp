#pragma once
// What makes two records the same one: their key, in the words that findings use.

#include <string>

#include "terms/records.hpp"

namespace scourbook::fieldfile {

/// "gauging G1 of TAR-1": the words for a record's key. Times in UTC.
[[nodiscard]] std::string key_of(const Station& record);
[[nodiscard]] std::string key_of(const GaugeZeroRow& record);
[[nodiscard]] std::string key_of(const ReachRow& record);
[[nodiscard]] std::string key_of(const Survey& record);
[[nodiscard]] std::string key_of(const Gauging& record);
[[nodiscard]] std::string key_of(const StageCorrection& record);

[[nodiscard]] inline const std::string& station_of(const Station& record) {
  return record.id;
}
template <class Record>
[[nodiscard]] const std::string& station_of(const Record& record) {
  return record.station;
}

/// Unique among records of a kind, whatever words the names hold.
template <class Record>
[[nodiscard]] std::string identity_of(const Record& record) {
  return station_of(record) + '\n' + key_of(record);
}

}  // namespace scourbook::fieldfile
