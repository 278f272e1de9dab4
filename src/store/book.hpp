#pragma once
// The book: one SQLite file that holds a network's curves and everything they rest on. Append-only: every row
// names the act that wrote it; corrections are new versions. All SQL of the program stands in this folder.

#include <functional>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "store/error.hpp"
#include "store/stage.hpp"
#include "terms/act.hpp"
#include "terms/curve.hpp"
#include "terms/history.hpp"
#include "terms/provenance.hpp"
#include "terms/records.hpp"

namespace scourbook::store {

/// Thresholds of a book, stored rows; the defaults are proposed by us.
struct Settings {
  std::int64_t longest_gap_minutes = 360;  ///< readings further apart than this have no flow between them
  std::int64_t published_digits = 3;       ///< significant digits of a published flow
  std::int64_t published_decimals = 3;     ///< and at most so many decimals, m3/s
  double least_share_of_day = 0.8;         ///< a day mean over a smaller share of the day is not given
  double estimate_above_gauged = 1.5;      ///< times the curve's largest gauging: quality estimate
  double poor_above_lineage = 1.5;         ///< times the lineage's largest gauging: quality poor
};

struct FileRecord {
  std::int64_t id = 0;
  std::int64_t act = 0;
  std::string name;  ///< as given, without folders
  std::int64_t bytes = 0;
  std::string sha256;
  std::string kind;  ///< "station", "gauge zero", "reach", "survey", "gauging", "stage", "stage correction"
};

/// One replay as kept: what it was a function of, and its digests.
struct ReplayMonth {
  UtcMonth month{};
  std::int64_t values = 0;
  std::string sha256;
};
struct ReplayRecord {
  int number = 0;
  std::string station;
  std::int64_t act = 0;
  int edition = 0;
  std::int64_t data_version = 0;
  int method = 1;
  Instant from{};
  Instant until{};
  std::vector<ReplayMonth> months;
};

/// One day of a publication. Values as published: whole numbers of 10^-decimals m3/s; empty where not given.
struct PublishedDay {
  int day = 0;  ///< StationDay number
  std::optional<std::int64_t> mean;
  std::optional<std::int64_t> u95_tenth_pct;
  Flags flags = 0;
  Quality quality = Quality::missing;
  double share = 0;
  std::vector<int> curves;  ///< curves that took part
};
/// Published instantaneous values of one UTC month.
struct PublishedMonth {
  UtcMonth month{};
  std::vector<std::int64_t> time_ms;
  std::vector<std::optional<std::int64_t>> value;  ///< 10^-decimals m3/s
  std::vector<std::int64_t> u95_tenth_pct;         ///< 0 where there is no value
  std::vector<Flags> flags;
  std::vector<Quality> quality;
  std::vector<int> curve;  ///< 0 where none
};
struct Publication {
  int number = 0;
  std::string station;
  std::int64_t act = 0;
  int replay = 0;
  Instant from{};
  Instant until{};
  int decimals = 3;
  std::string title;
  std::string note;
  std::string sha256;  ///< over months and days in canonical text
  std::vector<PublishedMonth> months;
  std::vector<PublishedDay> days;
};

/// One contradiction found by verify().
struct Damage {
  std::string table;
  std::int64_t act = 0;
  std::string text;  ///< what is wrong, with the row's key where it can be named
};

/// What an act is written with.
struct ActHead {
  std::string who;  ///< required
  std::string station;
  std::string reason;
  std::string command;
};

class Writer;

class Book {
 public:
  /// Creates a new book; refuses an existing file. The first act stores the settings.
  [[nodiscard]] static Book create(const std::string& path, const ActHead& head,
                                   const Settings& settings = {});
  /// Opens for reading only. Throws StoreError not_a_book / newer / damaged / refused.
  [[nodiscard]] static Book open_to_read(const std::string& path);
  /// Opens for writing: migrates older schemas (a book of an older schema is only migrated here), warns on a
  /// network file system.
  [[nodiscard]] static Book open_to_write(const std::string& path);
  Book(Book&&) noexcept;
  Book& operator=(Book&&) noexcept;
  ~Book();

  // ---- state of knowledge ----
  [[nodiscard]] std::int64_t newest_act() const;
  [[nodiscard]] Known known_at(Instant time) const;  ///< acts not later than `time`
  [[nodiscard]] std::vector<Act> acts(std::int64_t from = 1, std::int64_t to = INT64_MAX) const;
  [[nodiscard]] Act act(std::int64_t number) const;  ///< throws refused where it does not exist
  [[nodiscard]] Settings settings(Known known = {}) const;
  [[nodiscard]] std::optional<FileRecord> file(std::int64_t id) const;
  [[nodiscard]] std::vector<FileRecord> files(Known known = {}) const;
  /// Number of the last act that changed the station's stage, stage corrections or gauge zero, at most
  /// known.act; 0 if none.
  [[nodiscard]] std::int64_t data_version(const std::string& station, Known known = {}) const;

  // ---- field records: newest version known; withdrawn ones left out ----
  [[nodiscard]] std::vector<Stored<Station>> stations(Known known = {}) const;
  [[nodiscard]] std::optional<Stored<Station>> station(const std::string& id, Known known = {}) const;
  [[nodiscard]] std::vector<Stored<GaugeZeroRow>> gauge_zeros(const std::string& station,
                                                              Known known = {}) const;  ///< by valid_from
  struct ReachId {
    std::int64_t row = 0;
    Stored<ReachRow> stored;
  };
  [[nodiscard]] std::vector<ReachId> reach_rows(
      const std::string& station, Known known = {}) const;  ///< by valid_from, control, cross-section, part
  [[nodiscard]] std::optional<ReachId> reach_row(const std::string& station, std::int64_t row,
                                                 int version) const;
  [[nodiscard]] std::vector<Stored<Survey>> surveys(const std::string& station,
                                                    Known known = {}) const;  ///< by surveyed_at, with points
  [[nodiscard]] std::optional<Stored<Survey>> survey(const std::string& station, const std::string& id,
                                                     Known known = {}) const;
  [[nodiscard]] std::optional<Stored<Survey>> survey_version(const std::string& station,
                                                             const std::string& id, int version) const;
  [[nodiscard]] std::vector<Stored<Gauging>> gaugings(const std::string& station,
                                                      Known known = {}) const;  ///< by middle time
  [[nodiscard]] std::optional<Stored<Gauging>> gauging(const std::string& station, const std::string& id,
                                                       Known known = {}) const;
  [[nodiscard]] std::optional<Stored<Gauging>> gauging_version(const std::string& station,
                                                               const std::string& id, int version) const;
  [[nodiscard]] std::vector<Stored<StageCorrection>> stage_corrections(
      const std::string& station, Known known = {}) const;  ///< by from, then act

  // ---- stage ----
  [[nodiscard]] std::vector<UtcMonth> stage_months(const std::string& station, Known known = {}) const;
  [[nodiscard]] StageBlock stage_block(const std::string& station, UtcMonth month, Known known = {}) const;
  [[nodiscard]] std::optional<std::pair<Instant, Instant>> stage_span(
      const std::string& station, Known known = {}) const;  ///< first and last reading
  /// Origin of the reading of `station` at exactly `time`.
  [[nodiscard]] std::optional<ReadingOrigin> reading_origin(const std::string& station, Instant time,
                                                            Known known = {}) const;

  // ---- curves and history ----
  [[nodiscard]] std::vector<RatingCurve> curves(const std::string& station, Known known = {}) const;
  [[nodiscard]] std::optional<RatingCurve> curve(const std::string& station, int number,
                                                 Known known = {}) const;
  [[nodiscard]] std::int64_t curve_act(const std::string& station,
                                       int number) const;  ///< the act that stored it
  [[nodiscard]] std::vector<Edition> editions(const std::string& station, Known known = {}) const;
  [[nodiscard]] std::optional<Edition> edition(const std::string& station, int number) const;
  [[nodiscard]] std::optional<Edition> newest_edition(const std::string& station, Known known = {}) const;

  // ---- replays and publications ----
  [[nodiscard]] std::vector<ReplayRecord> replays(const std::string& station, Known known = {}) const;
  [[nodiscard]] std::optional<ReplayRecord> replay(const std::string& station, int number) const;
  /// Publications without months and days.
  [[nodiscard]] std::vector<Publication> publications(const std::string& station, Known known = {}) const;
  /// One publication, whole.
  [[nodiscard]] std::optional<Publication> publication(const std::string& station, int number) const;

  // ---- writing ----
  /// Takes the write lock (waits up to 10 s, then throws busy) and begins an act.
  [[nodiscard]] Writer begin(const ActHead& head);

  // ---- verification ----
  /// Recomputes chain, digests of every act's rows, piece digests, foreign keys, SQLite's own integrity
  /// check, rows without an act. `progress(done, total)` may be empty.
  [[nodiscard]] std::vector<Damage> verify(
      const std::function<void(std::int64_t, std::int64_t)>& progress = {}) const;

 private:
  friend class Writer;
  struct Impl;
  explicit Book(std::unique_ptr<Impl> impl);
  std::unique_ptr<Impl> impl_;
};

/// How a stage take went.
struct StageTaken {
  std::int64_t added = 0;     ///< new readings
  std::int64_t repeated = 0;  ///< equal to held ones, skipped
  std::int64_t pieces = 0;
  std::int64_t merged = 0;  ///< months rewritten into one merged piece
};

/// A held reading that a new file contradicts: by its value, or by a quality that it states.
struct StageOverlap {
  std::int64_t line = 0;
  Instant time{};
  std::int64_t held = kMissing;  ///< ticks of 1e-8 m
  std::int64_t given = kMissing;
  Quality held_quality = Quality::unchecked;
  Quality given_quality = Quality::unchecked;
};

/// Appends rows of one act in one transaction. Without commit() everything is rolled back.
class Writer {
 public:
  Writer(Writer&&) noexcept;
  ~Writer();
  [[nodiscard]] std::int64_t act() const;
  [[nodiscard]] std::int64_t add_file(const std::string& name, std::int64_t bytes, const std::string& sha256,
                                      const std::string& kind);

  /// New thresholds; the newest rows count from this act on. All must be finite.
  void add_settings(const Settings& settings);

  /// Each adds version 1, or the next version where the key is held and `correct` is true; throws refused
  /// where it is held and `correct` is false (readers find that first and report it as a finding). Withdrawn
  /// versions hide the record.
  void add(const Station& record, SourceLine source, bool correct = false, bool withdrawn = false);
  void add(const GaugeZeroRow& record, SourceLine source, bool correct = false, bool withdrawn = false);
  void add(const ReachRow& record, SourceLine source, bool correct = false, bool withdrawn = false);
  void add(const Survey& record, SourceLine source, const std::vector<std::int64_t>& point_lines,
           bool correct = false, bool withdrawn = false);
  void add(const Gauging& record, SourceLine source, bool correct = false, bool withdrawn = false);
  void add(const StageCorrection& record, SourceLine source, bool correct = false, bool withdrawn = false);

  /// Readings of `series` that contradict held ones: a different value at a held time, or the same with
  /// another quality than held (`unchecked` states none). Empty when it may be added.
  [[nodiscard]] std::vector<StageOverlap> overlaps(const StageSeries& series, std::size_t most = 50) const;
  /// Adds one piece per UTC month, more where held readings lie between new ones; repeated readings are
  /// skipped. With `correct` it replaces what it spans, quality too. Throws refused where overlaps() is not
  /// empty and `correct` is false.
  StageTaken add_stage(const StageSeries& series, std::int64_t file, bool correct = false);

  /// Stores a proposal; gives it the station's next number, sets number and lineage in the returned copy.
  /// Throws refused for a figure that is none (naming it), and where the parent is not held.
  [[nodiscard]] RatingCurve add_curve(RatingCurve curve);
  /// Periods by rising time without overlap, else throws refused. Sets number and act, as do those below.
  [[nodiscard]] Edition add_edition(Edition edition);
  [[nodiscard]] ReplayRecord add_replay(ReplayRecord replay);
  /// Computes the digest over months and days.
  [[nodiscard]] Publication add_publication(Publication publication);

  /// Digests the rows, links the act into the chain and commits, synchronously. Throws io / busy; then
  /// nothing is stored.
  Act commit();

 private:
  friend class Book;
  struct Impl;
  explicit Writer(std::unique_ptr<Impl> impl);
  std::unique_ptr<Impl> impl_;
};

/// SHA-256 of bytes as 64 hex digits (libcrypto).
[[nodiscard]] std::string sha256_hex(std::string_view bytes);

/// The program and method versions that acts and replays record.
inline constexpr int kMethodVersion = 1;
[[nodiscard]] std::string program_version();

}  // namespace scourbook::store
