#pragma once
// What one field file holds, as records, before the book has a say.

#include <cstdint>
#include <string>
#include <vector>

#include "fieldfile/bytes.hpp"
#include "fieldfile/columns.hpp"
#include "fieldfile/table.hpp"
#include "store/stage.hpp"
#include "terms/finding.hpp"
#include "terms/records.hpp"

namespace scourbook::fieldfile {

/// A record and where it stands.
template <class Record>
struct Located {
  Record record;
  Finding place;           ///< of its key (id or time), without words
  bool withdrawn = false;  ///< then only the key of the record is read
  bool repeated = false;   ///< set by judge: equal to what is held, not to be stored
};

struct LocatedSurvey : Located<Survey> {
  std::vector<std::int64_t> point_lines;  ///< line of each point
};

/// One file read and checked by itself. Only the vectors of its kind are filled.
struct ParsedFile {
  std::string path;          ///< as given
  std::optional<Kind> kind;  ///< none where the header was not understood
  std::int64_t bytes = 0;
  std::string sha256;
  std::int64_t rows = 0;             ///< data lines
  Findings findings;                 ///< not empty: the records must not be used
  std::vector<std::string> remarks;  ///< what people should know of a sound file

  std::vector<Located<Station>> stations;
  std::vector<Located<GaugeZeroRow>> gauge_zeros;
  std::vector<Located<ReachRow>> reaches;
  std::vector<LocatedSurvey> surveys;
  std::vector<Located<Gauging>> gaugings;
  std::vector<Located<StageCorrection>> corrections;
  std::vector<store::StageSeries> stage;  ///< one per station, all with the decimals of the file
};

struct ReadOptions {
  bool correct = false;  ///< a correction: the column withdrawn may be there
  bool plain_lines =
      true;  ///< stage lines without quotes go the short way; false is for tests of their equality
  Limits limits;
};

/// Reads one file from `source`. Stations it describes are added to `known`, so files of stations come first.
/// Every fault is a finding; never throws for bad input. `bytes` and `sha256` are left to the caller.
[[nodiscard]] ParsedFile read_records(ByteSource& source, const std::string& path, KnownStations& known,
                                      const ReadOptions& options = {});

}  // namespace scourbook::fieldfile
