#include "fieldfile/names.hpp"

#include <fmt/format.h>

namespace scourbook::fieldfile {
namespace {

std::string utc(Instant time) {
  return format_time(time, {});
}

}  // namespace

std::string key_of(const Station& record) {
  return "station " + record.id;
}

std::string key_of(const GaugeZeroRow& record) {
  return fmt::format("gauge zero of {} from {}", record.station, utc(record.valid_from));
}

std::string key_of(const ReachRow& record) {
  return fmt::format("reach row of {} from {}, {} control, cross-section {}, part {}", record.station,
                     utc(record.valid_from), word(record.control), record.cross_section, record.part);
}

std::string key_of(const Survey& record) {
  return fmt::format("survey {} of {}", record.id, record.station);
}

std::string key_of(const Gauging& record) {
  return fmt::format("gauging {} of {}", record.id, record.station);
}

std::string key_of(const StageCorrection& record) {
  return fmt::format("stage correction of {} from {} until {}", record.station, utc(record.from),
                     utc(record.until));
}

}  // namespace scourbook::fieldfile
